import { and, asc, desc, eq, inArray, ne } from 'drizzle-orm'
import { escalations, pathways, patients, reviews, sites, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { DomainError } from '#shared/domain/errors'

/** One patient with each pathway that the caller may see. Looking is itself recorded. */
export async function getPatient(ctx: ServiceContext, patientId: string) {
  const eyes = await ctx.db.select({ pathway: pathways, siteName: sites.name, zone: sites.zone }).from(pathways).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(and(eq(pathways.patientId, patientId), pathwaysInScope(ctx.actor))).orderBy(desc(pathways.referredAt))
  if (!eyes.length) throw new DomainError('patient.not-found', 'There is no such patient.')
  const ids = eyes.map(each => each.pathway.id)
  const [[patient], visitRows, reviewRows, open] = await Promise.all([
    ctx.db.select().from(patients).where(eq(patients.id, patientId)),
    ctx.db.select().from(visits).where(inArray(visits.pathwayId, ids)).orderBy(asc(visits.startsAt)),
    ctx.db.select().from(reviews).where(inArray(reviews.pathwayId, ids)).orderBy(desc(reviews.signedAt), desc(reviews.version)),
    ctx.db.select().from(escalations).where(and(inArray(escalations.pathwayId, ids), ne(escalations.state, 'closed'))),
    appendAudit(ctx.db, { at: ctx.now, event: 'patient.viewed', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: patientId }),
  ])
  if (!patient) throw new DomainError('patient.not-found', 'There is no such patient.')
  return { patient, eyes, visits: visitRows, reviews: reviewRows, escalations: open }
}
