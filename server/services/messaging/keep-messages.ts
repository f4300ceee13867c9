import { and, eq, inArray, or } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { messageEvents, messages } from '#server/db/schema/index'
import { makeLink } from '#server/services/messaging/patient-link'

export type NewMessage = typeof messages.$inferInsert
type Row = typeof messages.$inferSelect

/** Stands in a body for the patient's own link, which is made only for a row that is really written. */
export const linkMark = '[[link]]'

/**
 * Writes message rows, each at most once for (person, kind, subject, occasion, channel). What was withdrawn before it was ever
 * sent is queued anew: a visit moved away and back has its reminders again. What was sent, settled by a person or dropped
 * because another said the same stays as it is.
 */
export async function keepMessages(tx: Transaction, rows: NewMessage[], now: Date): Promise<void> {
  if (!rows.length) return
  const known = await tx.select().from(messages).where(or(...rows.map(sameMessage))).for('update')
  const again = await neverSent(tx, known.filter(row => row.state === 'withdrawn' && !row.sentAt && !row.inDoubtSince))
  for (const row of rows) {
    const found = known.find(each => isSame(each, row))
    if (!found) await insert(tx, row, now)
    else if (again.has(found.id)) await queueAgain(tx, found, row, now)
  }
}

function sameMessage(row: NewMessage) {
  return and(eq(messages.recipientKey, row.recipientKey), eq(messages.kind, row.kind), eq(messages.subjectKey, row.subjectKey), eq(messages.occasion, row.occasion), eq(messages.channel, row.channel))
}

function isSame(known: Row, row: NewMessage): boolean {
  return known.recipientKey === row.recipientKey && known.kind === row.kind && known.subjectKey === row.subjectKey && known.occasion === row.occasion && known.channel === row.channel
}

async function neverSent(tx: Transaction, withdrawn: Row[]): Promise<Set<string>> {
  if (!withdrawn.length) return new Set()
  const ended = await tx.select({ id: messageEvents.messageId }).from(messageEvents).where(and(inArray(messageEvents.messageId, withdrawn.map(row => row.id)), inArray(messageEvents.kind, ['sent', 'settled', 'dropped'])))
  return new Set(withdrawn.map(row => row.id).filter(id => !ended.some(each => each.id === id)))
}

async function insert(tx: Transaction, row: NewMessage, now: Date): Promise<void> {
  const [kept] = await tx.insert(messages).values({ ...row, body: await withLink(tx, row, now) }).onConflictDoNothing().returning({ id: messages.id, state: messages.state })
  if (kept) await tx.insert(messageEvents).values({ messageId: kept.id, at: now, kind: kept.state })
}

async function queueAgain(tx: Transaction, found: Row, row: NewMessage, now: Date): Promise<void> {
  const state = row.state ?? 'queued'
  const [queued] = await tx.update(messages).set({
    state, body: await withLink(tx, row, now), subject: row.subject ?? '', language: row.language ?? 'en', topic: row.topic ?? '', calendar: row.calendar ?? null, toAddress: row.toAddress, visitId: row.visitId ?? null,
    dueAt: row.dueAt, expiresAt: row.expiresAt, lastError: row.lastError ?? null, attempts: 0, leaseUntil: null,
  }).where(and(eq(messages.id, found.id), eq(messages.state, 'withdrawn'))).returning({ id: messages.id })
  if (queued) await tx.insert(messageEvents).values({ messageId: queued.id, at: now, kind: state, detail: { again: true } })
}

async function withLink(tx: Transaction, row: NewMessage, now: Date): Promise<string> {
  if (!row.patientId || !row.body.includes(linkMark)) return row.body
  return row.body.replace(linkMark, await makeLink(tx, { patientId: row.patientId, pathwayId: row.pathwayId ?? null, visitId: row.visitId ?? null, language: row.language, now }))
}
