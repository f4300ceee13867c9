import type { Difficulty, Source } from '#shared/domain/theatre/vocabulary'
import { mean, sum } from 'simple-statistics'
import { DomainError } from '#shared/domain/errors'
import { normalQuantile } from '#shared/domain/outcome/statistics-distributions'
import { difficultyTimeFactors } from '#shared/domain/theatre/nuclear-density'
import { difficulties } from '#shared/domain/theatre/vocabulary'

/** Minutes of a routine case until the surgeon has cases of their own. Common practice. */
export const defaultRoutineMinutes = 25
/** Spread of the logarithm of minutes until there are cases. Proposed: one routine case in ten above 34 minutes. */
const defaultSpread: Record<Difficulty, number> = { routine: 0.25, firm: 0.3, dense: 0.35 }
/** How many own cases weigh as much as the default. Proposed: after five the surgeon counts as much as the rule of thumb. */
export const defaultWeight = 5
/** Longer than this is a slip of the pen or another operation. */
export const longestCaseMinutes = 600

export const durationSource: Source = {
  text: 'Own past cases by difficulty, drawn towards the default by five cases; dense nucleus about three routine cases',
  label: 'common practice',
}

/** One finished case of the surgeon. `addedTime`: work beside the nucleus, in parts of a routine case, as the risk gave it. */
export interface PastCase { difficulty: Difficulty, minutes: number, addedTime?: number }

/** A duration whose logarithm is normal: never negative, with the long slow tail that operations have. */
export interface LogNormalMinutes { logMedian: number, logSpread: number }

/** What is known of one surgeon's time for one difficulty. */
export interface LearntDuration extends LogNormalMinutes { ownCases: number }

export interface DurationModel { byDifficulty: Record<Difficulty, LearntDuration>, source: Source }

export interface CaseDuration extends LogNormalMinutes {
  medianMinutes: number
  meanMinutes: number
  /** Passed by one case in ten. */
  slowMinutes: number
  /** Own past cases of this difficulty behind the figure. */
  ownCases: number
}

/**
 * A surgeon's time by difficulty, learnt from their own cases and drawn towards the default where they are few. The
 * routine time is learnt first, because the defaults of the others are multiples of it.
 *
 * Conjugate normal updating of the logarithm (Gelman et al., Bayesian Data Analysis, section 3.3; from memory) with the
 * default as prior; the predictive spread holds the doubt about the median as well.
 *
 * @param routineMinutes the unit's routine time, for a surgeon without cases
 * @throws DomainError `theatre.case-minutes-invalid` for minutes that are not above 0 and at most 600
 */
export function learnDurations(pastCases: readonly PastCase[], routineMinutes = defaultRoutineMinutes): DurationModel {
  checkMinutes('routineMinutes', routineMinutes)
  pastCases.forEach((past, index) => checkPastCase(past, index))
  const routine = learnOne(pastCases, 'routine', Math.log(routineMinutes))
  const entries = difficulties.map(difficulty => [
    difficulty,
    difficulty === 'routine' ? routine : learnOne(pastCases, difficulty, routine.logMedian + Math.log(difficultyTimeFactors[difficulty])),
  ])
  return { byDifficulty: Object.fromEntries(entries) as Record<Difficulty, LearntDuration>, source: durationSource }
}

function learnOne(pastCases: readonly PastCase[], difficulty: Difficulty, priorMedian: number): LearntDuration {
  const logs = pastCases.filter(past => past.difficulty === difficulty).map(withoutAddedTime).map(Math.log)
  const weight = defaultWeight
  const ownCases = logs.length
  const ownMean = ownCases ? mean(logs) : priorMedian
  const logMedian = (weight * priorMedian + ownCases * ownMean) / (weight + ownCases)
  const squares = sum(logs.map(value => (value - ownMean) ** 2))
  // Cases far from the default are a reason for doubt while they are few; the term fades as they become many.
  const disagreement = (weight * ownCases / (weight + ownCases)) * (ownMean - priorMedian) ** 2
  const variance = (weight * defaultSpread[difficulty] ** 2 + squares + disagreement) / (weight + ownCases)
  return { logMedian, logSpread: Math.sqrt(variance * (1 + 1 / (weight + ownCases))), ownCases }
}

/** What the nucleus alone took: a small pupil in the past says nothing about the next nucleus. */
function withoutAddedTime({ difficulty, minutes, addedTime = 0 }: PastCase): number {
  const factor = difficultyTimeFactors[difficulty]
  return minutes * factor / (factor + addedTime)
}

/**
 * The duration of a case to come. `addedTime` (0 or more, in parts of a routine case) is added in the surgeon's own
 * routine minutes: `assessRisk(...).timeFactor` less the factor of its difficulty.
 *
 * @throws DomainError `theatre.added-time-invalid`
 */
export function predictDuration(model: DurationModel, coming: { difficulty: Difficulty, addedTime?: number }): CaseDuration {
  const { logMedian, logSpread, ownCases } = model.byDifficulty[coming.difficulty]
  const addedTime = coming.addedTime ?? 0
  checkAddedTime('addedTime', addedTime)
  const medianMinutes = Math.exp(logMedian) + addedTime * Math.exp(model.byDifficulty.routine.logMedian)
  return describe({ logMedian: Math.log(medianMinutes), logSpread }, ownCases)
}

function describe(minutes: LogNormalMinutes, ownCases: number): CaseDuration {
  return {
    ...minutes,
    medianMinutes: Math.exp(minutes.logMedian),
    meanMinutes: Math.exp(minutes.logMedian + minutes.logSpread ** 2 / 2),
    slowMinutes: Math.exp(minutes.logMedian + normalQuantile(0.9) * minutes.logSpread),
    ownCases,
  }
}

function checkPastCase({ minutes, addedTime }: PastCase, index: number): void {
  checkMinutes(`pastCases.${index}.minutes`, minutes)
  checkAddedTime(`pastCases.${index}.addedTime`, addedTime ?? 0)
}

function checkMinutes(field: string, minutes: number): void {
  if (minutes > 0 && minutes <= longestCaseMinutes) return
  throw new DomainError('theatre.case-minutes-invalid', 'A case takes more than 0 and at most 600 minutes.', {
    fields: [{ field, code: 'out-of-range', message: 'Enter minutes above 0, at most 600.', limit: '0 to 600 min' }],
  })
}

function checkAddedTime(field: string, addedTime: number): void {
  if (addedTime >= 0 && addedTime <= 10) return
  throw new DomainError('theatre.added-time-invalid', 'Added time is a part of a routine case, 0 to 10.', {
    fields: [{ field, code: 'out-of-range', message: 'Enter 0 to 10 routine cases.', limit: '0 to 10' }],
  })
}
