import { and, asc, desc, eq, inArray, ne, sql } from 'drizzle-orm'
import { biometries, escalations, lensPlans, messages, operationNotes, pathwayEvents, pathways, patients, people, reviews, sites, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { DomainError } from '#shared/domain/errors'

/** One patient with each pathway that the caller may see, both eyes' newest records, the history and what was sent. Looking is itself recorded. */
export async function getPatient(ctx: ServiceContext, patientId: string) {
  const eyes = await ctx.db.select({ pathway: pathways, siteName: sites.name, zone: sites.zone }).from(pathways).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(and(eq(pathways.patientId, patientId), pathwaysInScope(ctx.actor))).orderBy(desc(pathways.referredAt))
  if (!eyes.length) throw new DomainError('patient.not-found', 'There is no such patient.')
  const ids = eyes.map(each => each.pathway.id)
  const [[patient], visitRows, reviewRows, open, biometryRows, planRows, noteRows, events, [sums]] = await Promise.all([
    ctx.db.select().from(patients).where(eq(patients.id, patientId)),
    ctx.db.select().from(visits).where(inArray(visits.pathwayId, ids)).orderBy(asc(visits.startsAt)),
    ctx.db.select({ review: reviews, kind: visits.kind, signedByName: people.name }).from(reviews).innerJoin(visits, eq(visits.id, reviews.visitId)).innerJoin(people, eq(people.id, reviews.signedBy)).where(inArray(reviews.pathwayId, ids)).orderBy(desc(reviews.signedAt), desc(reviews.version)),
    ctx.db.select().from(escalations).where(and(inArray(escalations.pathwayId, ids), ne(escalations.state, 'closed'))),
    ctx.db.selectDistinctOn([biometries.pathwayId]).from(biometries).where(inArray(biometries.pathwayId, ids)).orderBy(biometries.pathwayId, desc(biometries.version)),
    ctx.db.selectDistinctOn([lensPlans.pathwayId]).from(lensPlans).where(inArray(lensPlans.pathwayId, ids)).orderBy(lensPlans.pathwayId, desc(lensPlans.version)),
    ctx.db.selectDistinctOn([operationNotes.pathwayId]).from(operationNotes).where(inArray(operationNotes.pathwayId, ids)).orderBy(operationNotes.pathwayId, desc(operationNotes.version)),
    ctx.db.select({ id: pathwayEvents.id, pathwayId: pathwayEvents.pathwayId, at: pathwayEvents.at, words: pathwayEvents.words, personName: people.name }).from(pathwayEvents).leftJoin(people, eq(people.id, pathwayEvents.personId)).where(inArray(pathwayEvents.pathwayId, ids)).orderBy(desc(pathwayEvents.at)).limit(40),
    // Messages of a pathway that this caller may not see stay out of the sums too.
    ctx.db.select({ waiting: sql<number>`count(*) filter (where ${messages.state} in ('queued', 'sending'))::int`, toRing: sql<number>`count(*) filter (where ${messages.state} = 'held')::int`, failed: sql<number>`count(*) filter (where ${messages.state} = 'failed')::int`, sent: sql<number>`count(*) filter (where ${messages.state} in ('sent', 'delivered'))::int` })
      .from(messages).where(and(eq(messages.recipientKey, `patient:${patientId}`), inArray(messages.pathwayId, ids))),
    appendAudit(ctx.db, { at: ctx.now, event: 'patient.viewed', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: patientId }),
  ])
  if (!patient) throw new DomainError('patient.not-found', 'There is no such patient.')
  return { patient, eyes, visits: visitRows, reviews: reviewRows, escalations: open, biometries: biometryRows, plans: planRows, notes: noteRows, events, messages: sums ?? { waiting: 0, toRing: 0, failed: 0, sent: 0 } }
}
