import type { Answer } from '#shared/domain/outcome/statistics-answer'
import type { Interval } from '#shared/domain/outcome/statistics-intervals'
import { DomainError } from '#shared/domain/errors'
import { answerFrom, eyesForComparison } from '#shared/domain/outcome/statistics-answer'
import { checkCounts, checkProbability } from '#shared/domain/outcome/statistics-check'
import { binomialAtMost } from '#shared/domain/outcome/statistics-distributions'

/** Usual lines of a funnel: about two and about three standard deviations. */
export const funnelTails = { inner: 0.025, outer: 0.001 } as const

export const funnelPlaces = ['far-below', 'below', 'inside', 'above', 'far-above'] as const
/** `above`: beyond the 95 % line. `far-above`: beyond the 99.8 % line. Beyond a line means look, not guilt. */
export type FunnelPlace = typeof funnelPlaces[number]

/**
 * Exact limits of a rate around its target, interpolated between counts so that the lines run smoothly: Spiegelhalter,
 * Stat Med 2005;24:1185-1202 (the interpolation from memory of its appendix). Never below 0. With no eyes: 0 to 1.
 *
 * @param target rate aimed at, above 0 and below 1
 * @param tail chance beyond each line: 0.025 for 95 %, 0.001 for 99.8 %
 * @throws DomainError `outcome.probability-invalid`, `outcome.count-invalid`
 */
export function funnelLimits(target: number, eyes: number, tail: number): Interval {
  checkProbability('target', target)
  checkProbability('tail', tail)
  checkCounts(0, eyes)
  if (eyes === 0) return { low: 0, high: 1 }
  return { low: interpolated(target, eyes, tail), high: interpolated(target, eyes, 1 - tail) }
}

function interpolated(target: number, eyes: number, probability: number): number {
  const count = smallestCount(eyes, k => binomialAtMost(k, eyes, target) >= probability)
  const upTo = binomialAtMost(count, eyes, target)
  const part = (upTo - probability) / (upTo - binomialAtMost(count - 1, eyes, target))
  return Math.min(1, Math.max(0, (count - part) / eyes))
}

/** The least number of events that happens by chance with `tail` or less: P(X >= k) <= tail. `null` when even every eye would not. */
export function alarmingCount(target: number, eyes: number, tail: number): number | null {
  checkProbability('target', target)
  checkProbability('tail', tail)
  checkCounts(0, eyes)
  const count = smallestCount(eyes + 1, k => 1 - binomialAtMost(k - 1, eyes, target) <= tail)
  return count > eyes ? null : count
}

/** The conditions are monotone in the count, so halving finds the first. */
function smallestCount(most: number, holds: (count: number) => boolean): number {
  let low = 0
  let high = most
  while (low < high) {
    const middle = Math.floor((low + high) / 2)
    if (holds(middle)) high = middle
    else low = middle + 1
  }
  return low
}

export interface FunnelPoint {
  rate: number
  /** Observed over expected, times the target; the plain rate when no expectation was given. */
  adjustedRate: number
  inner: Interval
  outer: Interval
  place: FunnelPlace
}

/**
 * Where one surgeon or site lies. `expected` is the sum of the chances of its eyes (`assessRisk`), so that hard eyes do
 * not count against whoever takes them. From 50 eyes on.
 *
 * @throws DomainError `outcome.count-invalid`, `outcome.probability-invalid`, `outcome.expected-invalid`
 */
export function placeOnFunnel(observed: { events: number, eyes: number, expected?: number }, target: number, needed = eyesForComparison): Answer<FunnelPoint> {
  const { events, eyes, expected } = observed
  checkCounts(events, eyes)
  checkProbability('target', target)
  if (expected !== undefined && !(expected > 0 && expected <= eyes)) {
    throw new DomainError('outcome.expected-invalid', 'Expected events are the sum of the chances of these eyes.', {
      fields: [{ field: 'expected', code: 'out-of-range', message: 'Every eye needs a chance; leave out eyes without one.', limit: 'above 0, at most the number of eyes' }],
    })
  }
  return answerFrom(eyes, Math.max(1, needed), () => {
    const adjustedRate = expected === undefined ? events / eyes : events / expected * target
    const inner = funnelLimits(target, eyes, funnelTails.inner)
    const outer = funnelLimits(target, eyes, funnelTails.outer)
    return { rate: events / eyes, adjustedRate, inner, outer, place: placeOf(adjustedRate, inner, outer) }
  })
}

function placeOf(rate: number, inner: Interval, outer: Interval): FunnelPlace {
  if (rate > outer.high) return 'far-above'
  if (rate > inner.high) return 'above'
  if (rate < outer.low) return 'far-below'
  return rate < inner.low ? 'below' : 'inside'
}
