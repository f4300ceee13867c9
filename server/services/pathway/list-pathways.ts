import { and, asc, eq, isNull, ne, or, sql } from 'drizzle-orm'
import { escalations, pathways, patients, sites } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { Stage } from '#shared/domain/pathway/vocabulary'

export const pageOfPathways = 25

/** Open pathways by days since surgery, a keyset page at a time: earliest surgery first, those without a date last. */
export async function listPathways(ctx: ServiceContext, input: { stage?: Stage, after?: string }) {
  const [afterAt, afterId] = input.after?.split('_') ?? []
  const beyond = !afterId
    ? undefined
    : afterAt === 'none'
      ? and(isNull(pathways.surgeryAt), sql`${pathways.id} > ${afterId}::uuid`)
      : or(sql`(${pathways.surgeryAt}, ${pathways.id}) > (${afterAt}::timestamptz, ${afterId}::uuid)`, isNull(pathways.surgeryAt))
  return ctx.db.select({ pathway: pathways, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, phone: patients.phone }, zone: sites.zone, escalation: { id: escalations.id, urgency: escalations.urgency, state: escalations.state, raisedAt: escalations.raisedAt, reasons: escalations.reasons } })
    .from(pathways)
    .innerJoin(patients, eq(patients.id, pathways.patientId))
    .innerJoin(sites, eq(sites.id, pathways.siteId))
    .leftJoin(escalations, and(eq(escalations.pathwayId, pathways.id), ne(escalations.state, 'closed')))
    .where(and(pathwaysInScope(ctx.actor), ne(pathways.state, 'closed'), input.stage ? eq(pathways.stage, input.stage) : ne(pathways.stage, 'discharge'), beyond))
    .orderBy(sql`${pathways.surgeryAt} asc nulls last`, asc(pathways.id)).limit(pageOfPathways)
}
