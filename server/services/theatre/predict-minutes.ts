import { and, desc, eq, inArray, isNotNull, sql } from 'drizzle-orm'
import type { SQL } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import type { riskAssessments } from '#server/db/schema/index'
import { theatreCases, theatreLists } from '#server/db/schema/index'
import { learnDurations, longestCaseMinutes, predictDuration } from '#shared/domain/theatre/duration'
import type { DurationModel, PastCase } from '#shared/domain/theatre/duration'
import { difficultyTimeFactors } from '#shared/domain/theatre/nuclear-density'
import { difficulties } from '#shared/domain/theatre/vocabulary'
import type { Difficulty } from '#shared/domain/theatre/vocabulary'

/** The default by difficulty, for a surgeon whose cases nobody timed yet. */
const defaultModel = learnDurations([])

type Risk = Pick<typeof riskAssessments.$inferSelect, 'result'>

/** Difficulty of the nucleus, and the work beside it in parts of a routine case. Without a risk a case is routine. */
function workOf(risk: Risk | null | undefined): { difficulty: Difficulty, addedTime: number } {
  const difficulty = difficulties.find(each => each === risk?.result.difficulty) ?? 'routine'
  const timeFactor = typeof risk?.result.timeFactor === 'number' ? risk.result.timeFactor : difficultyTimeFactors[difficulty]
  return { difficulty, addedTime: Math.min(10, Math.max(0, timeFactor - difficultyTimeFactors[difficulty])) }
}

/** The timed cases of these surgeons, newest first. Enough to learn from, few enough to load with a page. */
export async function loadPastCases(db: Queryable, surgeons: string[] | SQL): Promise<{ surgeonId: string, past: PastCase }[]> {
  if (Array.isArray(surgeons) && !surgeons.length) return []
  const rows = await db.select({
    surgeonId: theatreLists.surgeonId, startedAt: theatreCases.startedAt, endedAt: theatreCases.endedAt,
    result: sql<Record<string, unknown> | null>`(select r.result from risk_assessments r where r.pathway_id = ${theatreCases.pathwayId} order by r.version desc limit 1)`,
  }).from(theatreCases).innerJoin(theatreLists, eq(theatreLists.id, theatreCases.listId))
    .where(and(Array.isArray(surgeons) ? inArray(theatreLists.surgeonId, surgeons) : surgeons, eq(theatreCases.state, 'done'), isNotNull(theatreCases.endedAt)))
    .orderBy(desc(theatreCases.endedAt)).limit(400)
  return rows.flatMap(({ surgeonId, startedAt, endedAt, result }) => {
    const minutes = startedAt && endedAt ? (endedAt.getTime() - startedAt.getTime()) / 60_000 : 0
    return minutes > 0 && minutes <= longestCaseMinutes ? [{ surgeonId, past: { ...workOf(result ? { result } : null), minutes } }] : []
  })
}

/** What is known of this surgeon's times. */
export function modelOf(rows: readonly { surgeonId: string, past: PastCase }[], surgeonId: string): DurationModel {
  const own = rows.filter(row => row.surgeonId === surgeonId).map(row => row.past)
  return own.length ? learnDurations(own) : defaultModel
}

/** The duration of a case from its risk: the nucleus sets the multiple, other hazards add their part. */
export function durationOf(risk: Risk | null | undefined, model: DurationModel = defaultModel) {
  return predictDuration(model, workOf(risk))
}

/** A list plans in steps of five minutes. */
export function plannedMinutesOf(risk: Risk | null | undefined, model: DurationModel = defaultModel): number {
  return Math.min(300, Math.max(5, Math.ceil(durationOf(risk, model).medianMinutes / 5 - 1e-9) * 5))
}
