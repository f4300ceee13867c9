import { and, desc, eq, inArray, ne, sql } from 'drizzle-orm'
import { biometries, lensPlans, operationNotes, pathwayEvents, pathways, people, practices, reviews } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { factsOf, loadRecords } from '#server/services/pathway/load-facts'
import { loadPathway } from '#server/services/pathway/load-pathway'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { missingFor, transitionFrom } from '#shared/domain/pathway/decide'

/** One pathway with its records, its facts, and what is missing before it may go on. Looking is recorded. */
export async function getPathway(ctx: ServiceContext, pathwayId: string) {
  const loaded = await loadPathway(ctx.db, ctx.actor, pathwayId)
  const { pathway } = loaded
  const [records, events, [surgeon], [practice], plans, notes, fellows, [fellowResult]] = await Promise.all([
    loadRecords(ctx.db, loaded),
    ctx.db.select({ id: pathwayEvents.id, at: pathwayEvents.at, kind: pathwayEvents.kind, words: pathwayEvents.words, personName: people.name }).from(pathwayEvents)
      .leftJoin(people, eq(people.id, pathwayEvents.personId)).where(eq(pathwayEvents.pathwayId, pathwayId)).orderBy(desc(pathwayEvents.at)).limit(60),
    ctx.db.select({ id: people.id, name: people.name }).from(people).where(eq(people.id, pathway.surgeonId ?? pathway.siteId)),
    ctx.db.select({ id: practices.id, name: practices.name }).from(practices).where(eq(practices.id, pathway.practiceId ?? pathway.siteId)),
    // Earlier versions of what was signed stay readable.
    ctx.db.select({ plan: lensPlans, signedByName: people.name }).from(lensPlans).innerJoin(people, eq(people.id, lensPlans.signedBy)).where(eq(lensPlans.pathwayId, pathwayId)).orderBy(desc(lensPlans.version)),
    ctx.db.select({ note: operationNotes, signedByName: people.name }).from(operationNotes).innerJoin(people, eq(people.id, operationNotes.signedBy)).where(eq(operationNotes.pathwayId, pathwayId)).orderBy(desc(operationNotes.version)),
    ctx.db.select({ id: pathways.id, eye: pathways.eye, stage: pathways.stage, state: pathways.state, biometry: biometries }).from(pathways).leftJoin(biometries, eq(biometries.pathwayId, pathways.id))
      .where(and(eq(pathways.patientId, pathway.patientId), ne(pathways.id, pathwayId), inArray(pathways.eye, [pathway.eye === 'right' ? 'left' : 'right']), pathwaysInScope(ctx.actor)))
      .orderBy(desc(pathways.referredAt), desc(biometries.version)).limit(1),
    // What the other eye reached after its own surgery, and with which plan: what a second eye learns from.
    ctx.db.select({ plan: lensPlans, operatedAt: pathways.operatedAt, findings: reviews.findings, signedAt: reviews.signedAt }).from(reviews).innerJoin(pathways, eq(pathways.id, reviews.pathwayId)).innerJoin(lensPlans, eq(lensPlans.pathwayId, pathways.id))
      .where(and(eq(pathways.patientId, pathway.patientId), ne(pathways.eye, pathway.eye), pathwaysInScope(ctx.actor), sql`${reviews.findings} ? 'refractionSphereD'`)).orderBy(desc(reviews.signedAt), desc(reviews.version), desc(lensPlans.version)).limit(1),
    appendAudit(ctx.db, { at: ctx.now, event: 'patient.viewed', personId: ctx.actor.personId, subjectKind: 'pathway', subjectId: pathwayId, siteId: pathway.siteId }),
  ])
  const facts = factsOf(loaded, records)
  const transition = transitionFrom(pathway.stage, 'advance')
  return {
    ...loaded, records, facts, events, surgeon, practice, plans, notes, fellow: fellows[0], fellowResult,
    goesTo: transition?.to ?? null,
    missing: transition ? missingFor(facts, transition.from, transition.to) : [],
  }
}
export type LoadedPathwayPage = Awaited<ReturnType<typeof getPathway>>
