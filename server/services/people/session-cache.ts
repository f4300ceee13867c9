import type { Actor } from '#shared/domain/people/vocabulary'

interface CachedSession { actor: Actor, idleEndsAt: number, readAt: number }

/** A few seconds' memory of session rows, cleared at once when a session is revoked or a role changes. */
const cache = new Map<string, CachedSession>()
const keepMs = 5_000

export function cachedActor(idHash: string, at: number): Actor | undefined {
  const found = cache.get(idHash)
  if (!found) return undefined
  if (at - found.readAt > keepMs || at < found.readAt || at > found.idleEndsAt) {
    cache.delete(idHash)
    return undefined
  }
  return found.actor
}

export function rememberActor(idHash: string, actor: Actor, at: number, idleEndsAt: number): void {
  if (cache.size > 5_000) cache.clear()
  cache.set(idHash, { actor, idleEndsAt, readAt: at })
}

/** Called in this process at once, and in the others through the live channel. */
export function forgetSessions(): void {
  cache.clear()
}
