/**
 * Numbers from 0 up to 1 that depend on the seed alone, so that a simulated list can be simulated again.
 * Mulberry32 by T. Ettinger, public domain: fast, small, good enough for a simulation, never for a secret.
 */
export function seededRandom(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6D2B79F5) >>> 0
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state)
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296
  }
}
