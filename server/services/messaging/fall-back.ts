import { and, eq, inArray, isNull, ne } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { messageEvents, messages, patients, sites } from '#server/db/schema/index'
import { reminderRules } from '#shared/domain/messaging/reminder-rules'
import type { MessageKind } from '#shared/domain/messaging/vocabulary'

type Row = typeof messages.$inferSelect

/**
 * A patient's text that reached nobody leaves once more by e-mail, if there is an address and it is not too late. Otherwise the
 * failed row stays on the nurse's list: somebody rings. An alert to staff needs none: both ways were taken at once.
 */
export async function fallBackToEmail(tx: Transaction, row: Row, now: Date): Promise<boolean> {
  if (row.channel !== 'text' || !row.patientId || row.expiresAt <= now) return false
  const [found] = await tx.select({ patient: patients, site: sites }).from(patients).innerJoin(sites, eq(sites.id, row.siteId ?? patients.siteId)).where(eq(patients.id, row.patientId))
  if (!found?.patient.email || found.patient.messageConsent !== true || found.patient.diedOn) return false
  const email = await twinByEmail(tx, row) ?? await insertEmail(tx, row, { to: found.patient.email, unit: found.site.name, now })
  if (!email) return false
  await tx.insert(messageEvents).values({ messageId: row.id, at: now, kind: 'fell-back', detail: { email } })
  return true
}

/** Of an announcement that took both ways at once the e-mail is there already; a failed one replaces nothing. */
async function twinByEmail(tx: Transaction, row: Row): Promise<string | undefined> {
  if (!row.occasion.endsWith(' by text')) return undefined
  const [twin] = await tx.select({ id: messages.id }).from(messages).where(and(
    eq(messages.recipientKey, row.recipientKey), eq(messages.kind, row.kind), eq(messages.subjectKey, row.subjectKey), eq(messages.channel, 'email'),
    eq(messages.occasion, row.occasion.replace(/ by text$/, ' by email')), inArray(messages.state, ['queued', 'sending', 'sent', 'delivered'])))
  return twin?.id
}

async function insertEmail(tx: Transaction, row: Row, { to, unit, now }: { to: string, unit: string, now: Date }): Promise<string | undefined> {
  const [email] = await tx.insert(messages).values({
    kind: row.kind, recipientKey: row.recipientKey, subjectKey: row.subjectKey, occasion: row.occasion, channel: 'email', patientId: row.patientId, pathwayId: row.pathwayId, visitId: row.visitId, siteId: row.siteId, topic: row.topic,
    toAddress: to, subject: `A message from ${unit}`, body: row.body, language: row.language, calendar: row.calendar, dueAt: row.dueAt > now ? row.dueAt : now, expiresAt: row.expiresAt, createdAt: now,
  }).onConflictDoNothing().returning({ id: messages.id })
  if (email) await tx.insert(messageEvents).values({ messageId: email.id, at: now, kind: 'queued', detail: { instead: row.id } })
  return email?.id
}

/** Somebody stopped texts: what was still to come leaves by e-mail, else a person rings. What was only wanted as a text ends. */
export async function passOnStoppedTexts(tx: Transaction, patientId: string, now: Date): Promise<void> {
  const waiting = await tx.select().from(messages).where(and(eq(messages.patientId, patientId), eq(messages.recipientKey, `patient:${patientId}`), eq(messages.channel, 'text'), inArray(messages.state, ['queued', 'held']), isNull(messages.inDoubtSince), ne(messages.kind, 'answer.stopped'))).for('update')
  for (const row of waiting) await passOnStopped(tx, row, now)
}

export async function passOnStopped(tx: Transaction, row: Row, now: Date): Promise<void> {
  const passedOn = stillNeeded(row) && (row.state === 'held' || await fallBackToEmail(tx, row, now))
  if (row.state === 'held' && passedOn) return
  const toRing = stillNeeded(row) && !passedOn
  await tx.update(messages).set(toRing ? { state: 'held', lastError: 'stopped texts, no e-mail address' } : { state: 'withdrawn' }).where(eq(messages.id, row.id))
  await tx.insert(messageEvents).values({ messageId: row.id, at: now, kind: toRing ? 'held' : 'withdrawn', detail: { why: 'stopped' } })
}

function stillNeeded(row: Row): boolean {
  const rule = reminderRules[row.kind as MessageKind] as (typeof reminderRules)[MessageKind] | undefined
  return rule !== undefined && !rule.onlyIfWanted && !row.kind.startsWith('answer.')
}
