import { and, eq, inArray, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { messageEvents, messages, pathways, patients } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { telephoneFrom } from '#server/services/patient/telephone'
import type { ContactsBody } from '#shared/contracts/patient'
import { DomainError } from '#shared/domain/errors'

type Patient = typeof patients.$inferSelect

/** How a patient can and wants to be reached. What waits to be sent follows at once: a text to an old number is a text to a stranger. */
export async function changeContacts(ctx: ServiceContext, input: ContactsBody & { patientId: string }) {
  const { patientId, rowVersion, numberConfirmed, ...given } = input
  const changed = await ctx.db.transaction(async (tx) => {
    const rows = await tx.select({ patient: patients, siteId: pathways.siteId }).from(patients).innerJoin(pathways, eq(pathways.patientId, patients.id))
      .where(and(eq(patients.id, patientId), pathwaysInScope(ctx.actor))).for('update', { of: patients })
    const before = rows[0]?.patient
    if (!before) throw new DomainError('patient.not-found', 'There is no such patient.')
    if (!rows.some(row => may(ctx.actor, 'changeContacts', row.siteId))) throw new DomainError('patient.not-allowed', 'The team of the site changes contact details.')
    if (before.rowVersion !== rowVersion) throw new DomainError('patient.stale', 'Somebody changed these details meanwhile. Look at them again.', { detail: { current: contactsOf(before) } })
    const phone = telephoneFrom(given.phone, 'phone')
    const carer = given.carer ? { ...given.carer, phone: telephoneFrom(given.carer.phone, 'carer.phone') ?? '' } : null
    const numberConfirmedAt = numberConfirmed && phone ? ctx.now : phone === before.phone ? before.numberConfirmedAt : null
    const [after] = await tx.update(patients).set({ ...given, phone, carer, numberConfirmedAt, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, patientId)).returning()
    if (!after) throw new DomainError('patient.not-found', 'There is no such patient.')
    await redirectQueued(tx, before, after, ctx.now)
    await appendAudit(tx, { at: ctx.now, event: 'patient.changed', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: patientId, siteId: after.siteId, payload: { fields: changedFields(before, after) } })
    return after
  })
  await notifyLive(ctx.db, 'message', changed.siteId, [changed.id])
  return changed
}

/** Queued messages go to the new address. Without consent, or without the address, they wait for a person to ring. */
async function redirectQueued(tx: Transaction, before: Patient, after: Patient, now: Date): Promise<void> {
  const waiting = and(eq(messages.patientId, after.id), eq(messages.recipientKey, `patient:${after.id}`), eq(messages.state, 'queued'))
  for (const [channel, from, to] of [['text', before.phone, after.phone], ['email', before.email, after.email]] as const) {
    const why = after.messageConsent !== true ? 'wants no messages' : to ? undefined : channel === 'text' ? 'no telephone number' : 'no e-mail address'
    if (why) {
      const held = await tx.update(messages).set({ state: 'held', lastError: why }).where(and(waiting, eq(messages.channel, channel))).returning({ id: messages.id })
      if (held.length) await tx.insert(messageEvents).values(held.map(row => ({ messageId: row.id, at: now, kind: 'held', detail: { why } })))
    }
    else if (from !== to) {
      const moved = await tx.update(messages).set({ toAddress: to ?? '' }).where(and(waiting, eq(messages.channel, channel))).returning({ id: messages.id })
      if (moved.length) await tx.insert(messageEvents).values(moved.map(row => ({ messageId: row.id, at: now, kind: 'address-changed' })))
    }
  }
  if (after.messageConsent === true && after.phone) await tx.update(messages).set({ toAddress: after.phone }).where(and(eq(messages.patientId, after.id), eq(messages.recipientKey, `patient:${after.id}`), inArray(messages.state, ['held']), eq(messages.channel, 'text')))
}

function contactsOf({ phone, email, address, language, preferredChannel, messageConsent, wantsDetail, wantsDropsReminders, needsTransport, interpreterLanguage, carer, rowVersion }: Patient) {
  return { phone, email, address, language, preferredChannel, messageConsent, wantsDetail, wantsDropsReminders, needsTransport, interpreterLanguage, carer, rowVersion }
}

/** Names of what changed, never the values: the log holds nobody's address. */
function changedFields(before: Patient, after: Patient): string[] {
  const [left, right] = [contactsOf(before), contactsOf(after)]
  return (Object.keys(left) as (keyof typeof left)[]).filter(field => field !== 'rowVersion' && JSON.stringify(left[field]) !== JSON.stringify(right[field]))
}
