import { and, eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { inboundTexts, patients, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { passOnStoppedTexts } from '#server/services/messaging/fall-back'
import { lastAsked, unscopedFindSender } from '#server/services/messaging/find-sender'
import type { Sender } from '#server/services/messaging/find-sender'
import { queuePatientMessages } from '#server/services/messaging/queue-messages'
import { receiveAlertReply } from '#server/services/messaging/receive-alert-reply'
import { answerFor, classifyReply } from '#shared/domain/messaging/reply'
import type { ReplyReading } from '#shared/domain/messaging/reply'

export interface InboundText { providerId: string, from: string, body: string }

const longestBody = 1600

/**
 * Takes a text: kept once whatever the provider repeats, understood, acted on and answered in one transaction. Worry raises an
 * escalation; stop cancels texts and no care; what is not understood, and what comes from a number that says nothing about who it
 * is, waits for a person. A member of staff answers an alert the same way.
 */
export async function receiveText(ctx: SystemContext, input: InboundText): Promise<void> {
  if (await receiveAlertReply(ctx, input)) return
  const body = input.body.slice(0, longestBody)
  const siteId = await ctx.db.transaction(async (tx) => {
    const { whose, siteId } = await unscopedFindSender(tx, input.from, ctx.now)
    const reading = classifyReply(body, whose ? await lastAsked(tx, whose.patient.id, ctx.now) : undefined)
    const understood = whose && !whose.patient.diedOn && !reading.needsPerson && reading.meaning !== 'cannot-come'
    const [kept] = await tx.insert(inboundTexts).values({
      providerId: input.providerId, fromNumber: input.from.slice(0, 40), body, meaning: reading.meaning, receivedAt: ctx.now,
      patientId: whose?.patient.id ?? null, visitId: whose?.visit?.id ?? null, siteId,
      ...(understood ? { handledAt: ctx.now, handledWords: 'Understood without a person.' } : {}),
    }).onConflictDoNothing().returning()
    if (kept && whose && !whose.patient.diedOn) await act(tx, ctx, whose, reading, kept.id)
    return kept ? siteId : undefined
  })
  if (siteId !== undefined) await Promise.all([notifyLive(ctx.db, 'message', siteId, []), notifyLive(ctx.db, 'escalation', siteId, []), notifyLive(ctx.db, 'visit', siteId, [])])
}

async function act(tx: Transaction, ctx: SystemContext, whose: Sender, reading: ReplyReading, inboundId: string): Promise<void> {
  const { patient, pathway, site, visit } = whose
  const { meaning } = reading
  if (visit && (meaning === 'confirm' || reading.confirms)) await answerForVisit(tx, visit, { confirmedAt: ctx.now, cannotComeAt: null })
  if (visit && meaning === 'cannot-come') await answerForVisit(tx, visit, { confirmedAt: null, cannotComeAt: ctx.now })
  if (meaning === 'worried') {
    await raiseEscalation(tx, { pathwayId: pathway.id, raisedBy: null, now: ctx.now, reasons: [{ ruleId: 'patient.worried', ruleVersion: 1, urgency: 'now', sentence: 'The patient wrote that something is wrong: somebody rings within the hour.', source: 'rules table 3; proposed', findings: { inboundId } }] })
  }
  if (meaning === 'stop' || meaning === 'wrong-person') await stopTexts(tx, ctx, whose)
  if (meaning === 'start') {
    await tx.update(patients).set({ textsStoppedAt: null, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, patient.id))
    await appendAudit(tx, { at: ctx.now, event: 'messaging.texts-started', personId: null, subjectKind: 'patient', subjectId: patient.id, siteId: site.id })
  }
  const answer = answerFor(meaning)
  // With no visit ahead there is no date to name: what would need one waits for a person instead.
  if (!answer || (!visit && answer === 'answer.confirmed')) return
  await queuePatientMessages(tx, { occasion: { kind: 'answer', answer, inboundId }, patient: { ...patient, messageConsent: true }, pathway, site, visit, subjectKey: `inbound:${inboundId}`, now: ctx.now, values: { place: site.name }, at: visit?.startsAt })
}

async function answerForVisit(tx: Transaction, visit: NonNullable<Sender['visit']>, said: { confirmedAt: Date | null, cannotComeAt: Date | null }): Promise<void> {
  await tx.update(visits).set({ ...said, rowVersion: sql`${visits.rowVersion} + 1` }).where(and(eq(visits.id, visit.id), sql`${visits.state} in ('booked', 'missing')`))
}

async function stopTexts(tx: Transaction, ctx: SystemContext, { patient, site }: Sender): Promise<void> {
  await tx.update(patients).set({ textsStoppedAt: ctx.now, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, patient.id))
  await passOnStoppedTexts(tx, patient.id, ctx.now)
  await appendAudit(tx, { at: ctx.now, event: 'messaging.texts-stopped', personId: null, subjectKind: 'patient', subjectId: patient.id, siteId: site.id })
}
