import { messageEvents, messages } from '#server/db/schema/index'
import { mayWrite } from '#server/policies/messaging'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { loadCorrespondent } from '#server/services/messaging/get-conversation'
import { DomainError } from '#shared/domain/errors'

const dayMs = 86_400_000

/** A person writes to a patient. `key` comes from the page, so that a second press sends nothing twice. */
export async function writeByHand(ctx: ServiceContext, input: { patientId: string, words: string, key: string }): Promise<{ channel: 'text' | 'email' }> {
  const { site, channel } = await ctx.db.transaction(async (tx) => {
    const { patient, pathway, site } = await loadCorrespondent(tx, ctx.actor, input.patientId)
    if (!mayWrite(ctx.actor, site.id)) throw new DomainError('messaging.not-allowed', 'You may not write to patients of this site.')
    const mayText = Boolean(patient.phone) && !patient.textsStoppedAt && patient.preferredChannel !== 'email'
    const channel = mayText ? 'text' as const : 'email' as const
    const toAddress = mayText ? patient.phone : patient.email
    if (patient.messageConsent !== true || !toAddress) throw new DomainError('messaging.no-way', 'This person wants no texts and no e-mail, or has none: ring them.')
    const [row] = await tx.insert(messages).values({
      kind: 'reply.hand', recipientKey: `patient:${patient.id}`, subjectKey: `patient:${patient.id}`, occasion: input.key, channel, patientId: patient.id, pathwayId: pathway.id, siteId: site.id,
      toAddress, subject: channel === 'email' ? `A message from ${site.name}` : '', body: `${input.words} Worried? Ring ${site.phone}.`, language: 'en', dueAt: ctx.now, expiresAt: new Date(ctx.now.getTime() + dayMs), createdAt: ctx.now,
    }).onConflictDoNothing().returning({ id: messages.id })
    if (row) {
      await tx.insert(messageEvents).values({ messageId: row.id, at: ctx.now, kind: 'queued', detail: { by: ctx.actor.personId } })
      await appendAudit(tx, { at: ctx.now, event: 'messaging.sent-by-hand', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: patient.id, siteId: site.id, payload: { messageId: row.id } })
    }
    return { site, channel }
  })
  await notifyLive(ctx.db, 'message', site.id, [])
  return { channel }
}
