import { eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { messageEvents, messages, patients, sites } from '#server/db/schema/index'

type Row = typeof messages.$inferSelect

/**
 * A patient's text that reached nobody leaves once more by e-mail, if there is an address and it is not too late. Otherwise the
 * failed row stays on the nurse's list: somebody rings. An alert to staff needs none: both ways were taken at once.
 */
export async function fallBackToEmail(tx: Transaction, row: Row, now: Date): Promise<void> {
  if (row.channel !== 'text' || !row.patientId || row.expiresAt <= now) return
  const [found] = await tx.select({ patient: patients, site: sites }).from(patients).innerJoin(sites, eq(sites.id, row.siteId ?? patients.siteId)).where(eq(patients.id, row.patientId))
  if (!found?.patient.email || found.patient.messageConsent !== true || found.patient.diedOn) return
  const [email] = await tx.insert(messages).values({
    kind: row.kind, recipientKey: row.recipientKey, subjectKey: row.subjectKey, occasion: row.occasion, channel: 'email', patientId: row.patientId, pathwayId: row.pathwayId, visitId: row.visitId, siteId: row.siteId,
    toAddress: found.patient.email, subject: `A message from ${found.site.name}`, body: row.body, language: row.language, calendar: row.calendar, dueAt: now, expiresAt: row.expiresAt, createdAt: now,
  }).onConflictDoNothing().returning({ id: messages.id })
  if (!email) return
  await tx.insert(messageEvents).values([
    { messageId: email.id, at: now, kind: 'queued', detail: { instead: row.id } },
    { messageId: row.id, at: now, kind: 'fell-back', detail: { email: email.id } },
  ])
}
