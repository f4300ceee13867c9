import type { riskAssessments } from '#server/db/schema/index'
import { learnDurations, predictDuration } from '#shared/domain/theatre/duration'
import { difficultyTimeFactors } from '#shared/domain/theatre/nuclear-density'
import { difficulties } from '#shared/domain/theatre/vocabulary'
import type { Difficulty } from '#shared/domain/theatre/vocabulary'

/** Between the end of one case and the start of the next. 'common practice': a site's own figure may replace it. */
export const turnoverMinutes = 10
/** The default by difficulty, until the minutes of a surgeon's own cases are kept. */
const model = learnDurations([])

type Risk = typeof riskAssessments.$inferSelect

/** The duration of a case from its risk: the nucleus sets the multiple, other hazards add their part. Without a risk it is routine. */
export function durationOf(risk: Risk | null | undefined) {
  const found = difficulties.find(each => each === risk?.result.difficulty)
  const difficulty: Difficulty = found ?? 'routine'
  const timeFactor = typeof risk?.result.timeFactor === 'number' ? risk.result.timeFactor : difficultyTimeFactors[difficulty]
  return predictDuration(model, { difficulty, addedTime: Math.max(0, timeFactor - difficultyTimeFactors[difficulty]) })
}

/** A list plans in steps of five minutes. */
export function plannedMinutesOf(risk: Risk | null | undefined): number {
  return Math.min(300, Math.max(5, Math.ceil(durationOf(risk).medianMinutes / 5) * 5))
}
