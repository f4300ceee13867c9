import { and, asc, desc, eq, gte, inArray, ne } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { escalations, inboundTexts, messageEvents, messages, pathways, patients, sites, visits } from '#server/db/schema/index'
import { replySites } from '#server/policies/messaging'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'
import type { Actor } from '#shared/domain/people/vocabulary'

/** The patient, if the caller works at the site of one of their pathways. A practice sees one shared eye, not what a patient writes to the unit. */
export async function loadCorrespondent(db: Queryable, actor: Actor, patientId: string) {
  const [row] = await db.select({ patient: patients, pathway: pathways, site: sites }).from(patients)
    .innerJoin(pathways, eq(pathways.patientId, patients.id)).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(and(eq(patients.id, patientId), pathwaysInScope(actor))).orderBy(desc(pathways.stageSince)).limit(1)
  if (!row || !replySites(actor).includes(row.site.id)) throw new DomainError('messaging.not-found', 'There is no such patient.')
  return row
}

/** Everything said to and by one patient, what is still to go out, and each message's attempts. */
export async function getConversation(ctx: ServiceContext, patientId: string) {
  const whose = await loadCorrespondent(ctx.db, ctx.actor, patientId)
  const [sent, received, booked, [escalation]] = await Promise.all([
    ctx.db.select().from(messages).where(and(eq(messages.patientId, patientId), eq(messages.recipientKey, `patient:${patientId}`))).orderBy(desc(messages.dueAt)).limit(120),
    ctx.db.select().from(inboundTexts).where(eq(inboundTexts.patientId, patientId)).orderBy(desc(inboundTexts.receivedAt)).limit(120),
    ctx.db.select().from(visits).where(and(eq(visits.patientId, patientId), gte(visits.startsAt, new Date(ctx.now.getTime() - 30 * 86_400_000)), inArray(visits.state, ['booked', 'arrived', 'with-optometrist', 'done', 'missing']))).orderBy(asc(visits.startsAt)),
    ctx.db.select().from(escalations).where(and(eq(escalations.patientId, patientId), ne(escalations.state, 'closed'))).limit(1),
  ])
  const events = sent.length ? await ctx.db.select().from(messageEvents).where(inArray(messageEvents.messageId, sent.map(row => row.id))).orderBy(asc(messageEvents.at)) : []
  return { ...whose, sent, received, booked, escalation, events }
}
export type LoadedConversation = Awaited<ReturnType<typeof getConversation>>
