import type { Answer } from '#shared/domain/outcome/statistics-answer'
import { answerFrom, eyesForSummary } from '#shared/domain/outcome/statistics-answer'
import { checkCounts, checkProbability } from '#shared/domain/outcome/statistics-check'
import { betaQuantile, normalQuantile } from '#shared/domain/outcome/statistics-distributions'

/** Ends of an interval, 0 to 1. */
export interface Interval { low: number, high: number }

/**
 * The score interval of Wilson (1927). Good at any number of eyes, also at 0 events, where the plain interval is a
 * point. Of no eyes at all it knows nothing: 0 to 1.
 *
 * @throws DomainError `outcome.count-invalid`, `outcome.probability-invalid`
 */
export function wilsonInterval(events: number, eyes: number, confidence = 0.95): Interval {
  checkCounts(events, eyes)
  checkProbability('confidence', confidence)
  if (eyes === 0) return { low: 0, high: 1 }
  const z = normalQuantile(0.5 + confidence / 2)
  const share = events / eyes
  const scale = 1 + z * z / eyes
  const centre = (share + z * z / (2 * eyes)) / scale
  const half = z * Math.sqrt(share * (1 - share) / eyes + z * z / (4 * eyes * eyes)) / scale
  // At the ends the formula gives exactly 0 or 1; in binary it may miss them by a hair.
  return { low: events === 0 ? 0 : centre - half, high: events === eyes ? 1 : centre + half }
}

/**
 * The exact interval of Clopper and Pearson (1934): never covers less than it says, so somewhat wide. Of no eyes: 0 to 1.
 *
 * @throws DomainError `outcome.count-invalid`, `outcome.probability-invalid`
 */
export function exactInterval(events: number, eyes: number, confidence = 0.95): Interval {
  checkCounts(events, eyes)
  checkProbability('confidence', confidence)
  const tail = (1 - confidence) / 2
  return {
    low: events === 0 ? 0 : betaQuantile(tail, events, eyes - events + 1),
    high: events === eyes ? 1 : betaQuantile(1 - tail, events + 1, eyes - events),
  }
}

export interface Proportion { events: number, percent: number, wilson: Interval, exact: Interval }

/** A share of eyes with both intervals, from 30 eyes on. @throws DomainError `outcome.count-invalid` */
export function describeProportion(events: number, eyes: number, needed = eyesForSummary): Answer<Proportion> {
  checkCounts(events, eyes)
  return answerFrom(eyes, Math.max(1, needed), () => ({
    events, percent: 100 * events / eyes, wilson: wilsonInterval(events, eyes), exact: exactInterval(events, eyes),
  }))
}
