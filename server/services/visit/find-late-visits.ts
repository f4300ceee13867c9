import { and, asc, inArray, lte, sql } from 'drizzle-orm'
import { visits } from '#server/db/schema/index'
import type { SystemContext } from '#server/services/context'
import { missingStepPlan } from '#shared/domain/visit/missing-steps'

const minuteMs = 60_000
const mostAtOnce = 100

/** Visits whose patient is late enough for the steps, soonest booked first. Whose steps have ended waits for a person, not for the clock. */
export async function findLateVisits(ctx: SystemContext): Promise<string[]> {
  const begins = missingStepPlan[0]?.minutesLate ?? 20
  const rows = await ctx.db.select({ id: visits.id }).from(visits)
    .where(and(inArray(visits.state, ['booked', 'missing']), lte(visits.startsAt, new Date(ctx.now.getTime() - begins * minuteMs)),
      sql`not exists (select 1 from missing_steps m where m.visit_id = ${visits.id} and m.step in ('found', 'not-found'))`))
    .orderBy(asc(visits.startsAt)).limit(mostAtOnce)
  return rows.map(row => row.id)
}
