import { and, eq, inArray } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { messageEvents, messages, pathways, patients, sites } from '#server/db/schema/index'
import { passOnStopped } from '#server/services/messaging/fall-back'
import { dropDuplicates } from '#shared/domain/messaging/duplicates'
import { nextAllowed } from '#shared/domain/messaging/quiet-hours'
import { mayLeaveAt } from '#shared/domain/messaging/reminder-plan'
import { reminderRules } from '#shared/domain/messaging/reminder-rules'
import type { ReminderRule } from '#shared/domain/messaging/reminder-rules'
import type { MessageKind, PlannedKind } from '#shared/domain/messaging/vocabulary'
import { plannedKinds } from '#shared/domain/messaging/vocabulary'

type Row = typeof messages.$inferSelect
interface About { patient: typeof patients.$inferSelect, pathwayState: string | null, zone: string }

/**
 * What was planned may have waited: asked again at the moment it would leave. Nothing to a patient after a death, no reminder of
 * a closed pathway, no text after STOP, nothing in quiet hours, one of two that say the same. Answers the rows that may leave.
 */
export async function screenDue(tx: Transaction, due: Row[], now: Date): Promise<Row[]> {
  const toPatients = due.filter(row => row.patientId && row.recipientKey === `patient:${row.patientId}` && !row.inDoubtSince)
  if (!toPatients.length) return due
  const [about, sameAs] = await Promise.all([loadAbout(tx, toPatients), findDuplicates(tx, toPatients)])
  const kept = new Set(due.map(row => row.id))
  for (const row of toPatients) {
    const whose = about.get(row.id)
    if (whose && !await mayLeave(tx, row, whose, sameAs.get(row.id), now)) kept.delete(row.id)
  }
  return due.filter(row => kept.has(row.id))
}

async function mayLeave(tx: Transaction, row: Row, { patient, pathwayState, zone }: About, sameAs: string | undefined, now: Date): Promise<boolean> {
  const rule = reminderRules[row.kind as MessageKind] as ReminderRule | undefined
  if (patient.diedOn) return refuse(tx, row, 'withdrawn', { kind: 'withdrawn', detail: { why: 'died' } }, now)
  if (pathwayState === 'closed' && plannedKinds.includes(row.kind as PlannedKind)) return refuse(tx, row, 'withdrawn', { kind: 'withdrawn', detail: { why: 'closed' } }, now)
  if (patient.textsStoppedAt && row.channel === 'text' && !rule?.evenWhenStopped) {
    await passOnStopped(tx, row, now)
    return false
  }
  if (sameAs) return refuse(tx, row, 'withdrawn', { kind: 'dropped', detail: { sameAs } }, now)
  // Words that a person writes by hand leave when that person says so.
  if (!rule || mayLeaveAt(row.kind as MessageKind, now, zone)) return true
  return waitForMorning(tx, row, rule, zone, now)
}

async function waitForMorning(tx: Transaction, row: Row, rule: ReminderRule, zone: string, now: Date): Promise<false> {
  const dueAt = nextAllowed(now, zone, rule.quiet === 'from-seven' ? '07:00' : undefined)
  if (dueAt < row.expiresAt) {
    await tx.update(messages).set({ dueAt, state: 'queued' }).where(eq(messages.id, row.id))
    await tx.insert(messageEvents).values({ messageId: row.id, at: now, kind: 'waits', detail: { why: 'quiet hours', until: dueAt.toISOString() } })
    return false
  }
  const ring = rule.timing.by === 'at-once' && rule.timing.untilStart === true
  return refuse(tx, row, ring ? 'held' : 'expired', { kind: ring ? 'held' : 'expired', detail: { why: 'cannot be reached in time by message' } }, now)
}

async function refuse(tx: Transaction, row: Row, state: 'withdrawn' | 'held' | 'expired', event: { kind: string, detail: { why?: string, sameAs?: string } }, now: Date): Promise<false> {
  await tx.update(messages).set({ state, ...(state === 'held' ? { lastError: event.detail.why } : {}) }).where(eq(messages.id, row.id))
  await tx.insert(messageEvents).values({ messageId: row.id, at: now, ...event })
  return false
}

async function loadAbout(tx: Transaction, rows: Row[]): Promise<Map<string, About>> {
  const found = await tx.select({ id: messages.id, patient: patients, pathwayState: pathways.state, zone: sites.zone }).from(messages)
    .innerJoin(patients, eq(patients.id, messages.patientId)).leftJoin(pathways, eq(pathways.id, messages.pathwayId)).innerJoin(sites, eq(sites.id, patients.siteId))
    .where(inArray(messages.id, rows.map(row => row.id)))
  return new Map(found.map(({ id, ...about }) => [id, about]))
}

/** Both senders of two machines drop the same one: the earlier due, then the lower id, is the one that is kept. */
async function findDuplicates(tx: Transaction, rows: Row[]): Promise<Map<string, string>> {
  const told = rows.filter(row => row.topic !== '')
  if (!told.length) return new Map()
  const alike = await tx.select().from(messages).where(and(inArray(messages.recipientKey, told.map(row => row.recipientKey)), inArray(messages.topic, told.map(row => row.topic)), inArray(messages.state, ['queued', 'sending', 'sent', 'delivered'])))
  const { dropped } = dropDuplicates(alike.sort((left, right) => left.id.localeCompare(right.id)).map(row => ({ id: row.id, kind: row.kind as MessageKind, topic: row.topic, channel: row.channel, dueAt: row.dueAt, personId: row.recipientKey })))
  return new Map(dropped.map(({ message, sameAs }) => [message.id, sameAs.id]))
}
