/**
 * An answer, or the refusal to give one from too few eyes. A screen cannot print a figure without first asking which of
 * the two it holds.
 */
export type Answer<T> = ({ kind: 'answer', eyes: number } & T) | TooFew
export interface TooFew {
  kind: 'too-few'
  eyes: number
  /** From how many eyes on there is an answer. */
  needed: number
}

/** For a mean, a median or a share. Proposed: at 30 eyes the 95 % interval of a half is still 17 points to either side. */
export const eyesForSummary = 30
/** For a comparison of one surgeon with a target: the national cataract audit of the UK publishes from 50 operations on. */
export const eyesForComparison = 50

export function answerFrom<T>(eyes: number, needed: number, work: () => T): Answer<T> {
  return eyes < needed ? { kind: 'too-few', eyes, needed } : { kind: 'answer', eyes, ...work() }
}
