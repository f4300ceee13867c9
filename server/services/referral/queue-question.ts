import type { Transaction } from '#server/db/client'
import { messageEvents, messages } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import type { Decided } from '#server/services/referral/triage-referral'
import { dayBounds } from '#shared/domain/visit/site-day'

const weekMs = 7 * 86_400_000

/**
 * Sends the surgeon's question to the one who referred. The mail goes to a clinician who has no account here, so the question itself
 * has to be in it; the patient is named by initials, year of birth and our record number only.
 */
export async function queueQuestion(tx: Transaction, ctx: ServiceContext, { eyes, note }: { eyes: readonly Decided[], note: string }): Promise<'queued' | 'no-address'> {
  const [first] = eyes
  if (!first?.referral.referrerEmail) return 'no-address'
  const { patient, pathway, site } = first.loaded
  const initials = patient.name.split(/\s+/).map(part => `${part[0] ?? ''}.`).join(' ')
  const which = eyes.length > 1 ? 'both eyes' : `${pathway.eye} eye`
  const referredOn = dayBounds(site.zone, pathway.referredAt).date.split('-').reverse().join('.')
  const body = [
    `To ${first.referral.referrer}`,
    `You referred ${initials}, born ${patient.birthDate.slice(0, 4)}, to ${site.name} on ${referredOn} (${which}; our record ${patient.recordNumber}).`,
    `Before the referral can be decided, our surgeon asks:`,
    note,
    `Please answer by telephone on ${site.phone}, and give our record number. Please do not send the patient's name by e-mail.`,
  ].join('\n\n')
  const [row] = await tx.insert(messages).values({
    kind: 'referral.question', recipientKey: `referrer:${first.referral.referrerEmail}`, subjectKey: `pathway:${pathway.id}`, occasion: `question ${first.referral.rowVersion}`, channel: 'email', patientId: patient.id, pathwayId: pathway.id, siteId: site.id,
    toAddress: first.referral.referrerEmail, subject: `A question about your referral (${patient.recordNumber})`, body, language: 'en', dueAt: ctx.now, expiresAt: new Date(ctx.now.getTime() + weekMs), createdAt: ctx.now,
  }).onConflictDoNothing().returning({ id: messages.id })
  if (row) await tx.insert(messageEvents).values({ messageId: row.id, at: ctx.now, kind: 'queued', detail: { by: ctx.actor.personId } })
  return 'queued'
}
