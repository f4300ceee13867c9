import { and, asc, eq, isNotNull, isNull, sql } from 'drizzle-orm'
import { pathways, patients, sites } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'

/** Operated eyes without a live day-one visit and without a recorded decision for another kind of first check. */
export async function listToBook(ctx: ServiceContext, input: { siteId?: string }) {
  return ctx.db.select({ id: pathways.id, eye: pathways.eye, operatedAt: pathways.operatedAt, dayOneNeed: pathways.dayOneNeed, siteId: pathways.siteId, siteName: sites.name, zone: sites.zone, surgeonId: pathways.surgeonId, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, needsTransport: patients.needsTransport, interpreterLanguage: patients.interpreterLanguage, alerts: patients.alerts, phone: patients.phone } })
    .from(pathways).innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(and(
      pathwaysInScope(ctx.actor), eq(pathways.state, 'open'), eq(pathways.stage, 'surgery'), isNotNull(pathways.operatedAt), isNull(pathways.otherFirstCheck),
      input.siteId ? eq(pathways.siteId, input.siteId) : undefined,
      sql`not exists (select 1 from visits v where v.pathway_id = ${pathways.id} and v.kind = 'day-one' and v.state not in ('cancelled', 'moved'))`,
    ))
    .orderBy(asc(pathways.operatedAt), asc(pathways.id)).limit(200)
}
