import { and, asc, desc, eq, gte, inArray, sql } from 'drizzle-orm'
import dayjs from 'dayjs'
import type { Transaction } from '#server/db/client'
import { inboundTexts, messageEvents, messages, pathways, patients, sites, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { queuePatientMessages } from '#server/services/messaging/queue-messages'
import { answerFor, classifyReply } from '#shared/domain/messaging/reply'
import type { ReplyReading } from '#shared/domain/messaging/reply'

export interface InboundText { providerId: string, from: string, body: string }

/**
 * Takes a patient's text: kept once whatever the provider repeats, understood, acted on and answered in one transaction.
 * Worry raises an escalation; stop cancels texts and no care; what is not understood waits for a person.
 */
export async function receiveText(ctx: SystemContext, input: InboundText): Promise<void> {
  const body = input.body.slice(0, 1600)
  const siteId = await ctx.db.transaction(async (tx) => {
    const whose = await unscopedFindByPhone(tx, input.from, ctx.now)
    const reading = classifyReply(body)
    const [kept] = await tx.insert(inboundTexts).values({
      providerId: input.providerId, fromNumber: input.from.slice(0, 40), body, meaning: reading.meaning, receivedAt: ctx.now,
      patientId: whose?.patient.id ?? null, visitId: whose?.visit?.id ?? null, siteId: whose?.site.id ?? null,
      ...(whose && !reading.needsPerson && reading.meaning !== 'cannot-come' ? { handledAt: ctx.now, handledWords: 'Understood without a person.' } : {}),
    }).onConflictDoNothing().returning()
    if (!kept || !whose) return undefined
    await act(tx, ctx, whose, reading, kept.id)
    return whose.site.id
  })
  if (siteId) await Promise.all([notifyLive(ctx.db, 'message', siteId, []), notifyLive(ctx.db, 'escalation', siteId, []), notifyLive(ctx.db, 'visit', siteId, [])])
}

/** Unscoped: a text carries no session; the number is all that says who it is from. A number that two people share matches nobody by itself. */
async function unscopedFindByPhone(tx: Transaction, from: string, now: Date) {
  const found = await tx.select({ patient: patients, pathway: pathways, site: sites }).from(patients)
    .innerJoin(pathways, eq(pathways.patientId, patients.id)).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(eq(patients.phone, from)).orderBy(sql`${pathways.state} = 'closed'`, desc(pathways.operatedAt))
  const first = found[0]
  if (!first || found.some(row => row.patient.id !== first.patient.id)) return undefined
  const [visit] = await tx.select().from(visits)
    .where(and(eq(visits.patientId, first.patient.id), inArray(visits.state, ['booked', 'missing']), gte(visits.startsAt, new Date(now.getTime() - 6 * 3_600_000)))).orderBy(asc(visits.startsAt)).limit(1)
  const ofVisit = visit ? found.find(row => row.pathway.id === visit.pathwayId) : undefined
  return { ...(ofVisit ?? first), visit }
}

type Whose = NonNullable<Awaited<ReturnType<typeof unscopedFindByPhone>>>

async function act(tx: Transaction, ctx: SystemContext, whose: Whose, reading: ReplyReading, inboundId: string): Promise<void> {
  const { patient, pathway, site, visit } = whose
  const { meaning } = reading
  if (visit && (meaning === 'confirm' || reading.confirms)) await tx.update(visits).set({ confirmedAt: ctx.now, cannotComeAt: null, rowVersion: sql`${visits.rowVersion} + 1` }).where(eq(visits.id, visit.id))
  if (visit && meaning === 'cannot-come') await tx.update(visits).set({ cannotComeAt: ctx.now, confirmedAt: null, rowVersion: sql`${visits.rowVersion} + 1` }).where(eq(visits.id, visit.id))
  if (meaning === 'worried') {
    await raiseEscalation(tx, { pathwayId: pathway.id, raisedBy: null, now: ctx.now, reasons: [{ ruleId: 'patient.worried', ruleVersion: 1, urgency: 'now', sentence: 'The patient wrote that something is wrong: somebody rings within the hour.', source: 'rules table 3; proposed', findings: { inboundId } }] })
  }
  if (meaning === 'stop' || meaning === 'wrong-person') {
    await tx.update(patients).set({ textsStoppedAt: ctx.now, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, patient.id))
    const withdrawn = await tx.update(messages).set({ state: 'withdrawn' }).where(and(eq(messages.patientId, patient.id), eq(messages.channel, 'text'), inArray(messages.state, ['queued', 'held']))).returning({ id: messages.id })
    if (withdrawn.length) await tx.insert(messageEvents).values(withdrawn.map(row => ({ messageId: row.id, at: ctx.now, kind: 'withdrawn', detail: { why: 'stopped' } })))
    await appendAudit(tx, { at: ctx.now, event: 'messaging.texts-stopped', personId: null, subjectKind: 'patient', subjectId: patient.id, siteId: site.id })
  }
  if (meaning === 'start') {
    await tx.update(patients).set({ textsStoppedAt: null, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, patient.id))
    await appendAudit(tx, { at: ctx.now, event: 'messaging.texts-started', personId: null, subjectKind: 'patient', subjectId: patient.id, siteId: site.id })
  }
  const answer = answerFor(meaning)
  if (!answer) return
  const local = visit ? dayjs(visit.startsAt).tz(site.zone) : undefined
  // With no visit ahead there is no date to name: what would need one waits for a person instead.
  if (!local && answer === 'answer.confirmed') return
  await queuePatientMessages(tx, { occasion: { kind: 'answer', answer, inboundId }, patient: { ...patient, messageConsent: true }, pathway, site, visit, subjectKey: `inbound:${inboundId}`, now: ctx.now, values: local ? { date: local.format('dddd D MMMM'), time: local.format('HH:mm'), place: site.name } : { place: site.name } })
}
