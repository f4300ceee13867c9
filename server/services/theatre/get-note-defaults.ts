import { and, desc, eq, sql } from 'drizzle-orm'
import { operationNotes } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { loadPathway } from '#server/services/pathway/load-pathway'

/** The surgeon's own habits, for a note that starts from them: the last case without a complication, and the medians of such cases. */
export async function getNoteDefaults(ctx: ServiceContext, pathwayId: string) {
  const { pathway } = await loadPathway(ctx.db, ctx.actor, pathwayId)
  const routine = and(eq(operationNotes.signedBy, ctx.actor.personId), sql`jsonb_array_length(${operationNotes.complications}) = 0`)
  const [[last], [medians]] = await Promise.all([
    ctx.db.select({ anaesthesia: operationNotes.anaesthesia, incision: operationNotes.incision, technique: operationNotes.technique, viscoelastics: operationNotes.viscoelastics }).from(operationNotes).where(routine).orderBy(desc(operationNotes.signedAt)).limit(1),
    ctx.db.select({
      cases: sql<number>`count(*)::int`,
      energyPercentSeconds: sql<number | null>`percentile_cont(0.5) within group (order by ${operationNotes.energyPercentSeconds})`,
      ultrasoundSeconds: sql<number | null>`percentile_cont(0.5) within group (order by ${operationNotes.ultrasoundSeconds})`,
    }).from(operationNotes).where(routine),
  ])
  return { pathwayId: pathway.id, last: last ?? null, medians: medians ?? { cases: 0, energyPercentSeconds: null, ultrasoundSeconds: null } }
}
