import { and, eq, gte, inArray, lte, notExists, or, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { inboundTexts, messages, pathways, patients, symptomChecks, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'

const hourMs = 3_600_000
const answerWithinMs = 24 * hourMs
/** Looked back this far, for a sweep that did not run for days. */
const lookBackMs = 14 * 24 * hourMs
const atOnce = 100

const mark = sql<string>`'unanswered:' || ${messages.subjectKey} || ':' || ${messages.occasion}`

/** Day-3 symptom checks that nobody answered within 24 hours, or that could not be sent at all, and of which no nurse knows yet. */
export async function findUnansweredChecks(ctx: SystemContext): Promise<string[]> {
  const rows = await ctx.db.select({ id: messages.id }).from(messages).where(unanswered(ctx)).orderBy(messages.dueAt).limit(atOnce)
  return rows.map(row => row.id)
}

/** Puts one on the nurse's list, once whatever runs twice: the check itself names the row that is written. */
export async function flagUnansweredCheck(ctx: SystemContext, messageId: string): Promise<boolean> {
  const siteId = await ctx.db.transaction(async (tx) => {
    const [row] = await tx.select().from(messages).where(and(eq(messages.id, messageId), unanswered(ctx))).for('update', { of: messages, skipLocked: true })
    if (!row?.patientId || !row.siteId) return undefined
    return await keep(tx, row, ctx.now) ? row.siteId : undefined
  })
  if (siteId) await notifyLive(ctx.db, 'message', siteId, [])
  return siteId !== undefined
}

async function keep(tx: Transaction, row: typeof messages.$inferSelect, now: Date): Promise<boolean> {
  const body = row.state === 'expired' ? 'Their symptom check of day 3 could not be sent. Ring and ask.' : 'No answer to the symptom check of day 3 within 24 hours. Ring and ask.'
  const [kept] = await tx.insert(inboundTexts).values({ providerId: `unanswered:${row.subjectKey}:${row.occasion}`, fromNumber: 'system', patientId: row.patientId, siteId: row.siteId, body, meaning: 'no-answer', receivedAt: now }).onConflictDoNothing().returning({ id: inboundTexts.id })
  if (kept) await appendAudit(tx, { at: now, event: 'messaging.check-unanswered', personId: null, subjectKind: 'patient', subjectId: row.patientId ?? '', siteId: row.siteId, payload: { messageId: row.id } })
  return kept !== undefined
}

/** Answered means: told us on the page, wrote anything, or was seen since. Nobody is rung after a death or a pathway's end. */
function unanswered(ctx: SystemContext) {
  const since = new Date(ctx.now.getTime() - lookBackMs)
  const asked = sql`coalesce(${messages.sentAt}, ${messages.dueAt})`
  return and(
    eq(messages.kind, 'safety.day3'), gte(messages.dueAt, since),
    or(and(inArray(messages.state, ['sent', 'delivered']), lte(messages.sentAt, new Date(ctx.now.getTime() - answerWithinMs))), eq(messages.state, 'expired')),
    notExists(ctx.db.select({ one: sql`1` }).from(symptomChecks).where(and(eq(symptomChecks.patientId, messages.patientId), sql`${symptomChecks.at} >= ${asked}`))),
    notExists(ctx.db.select({ one: sql`1` }).from(inboundTexts).where(or(eq(inboundTexts.providerId, mark), and(eq(inboundTexts.patientId, messages.patientId), sql`${inboundTexts.receivedAt} >= ${asked}`, sql`${inboundTexts.meaning} <> 'no-answer'`)))),
    notExists(ctx.db.select({ one: sql`1` }).from(visits).where(and(eq(visits.patientId, messages.patientId), eq(visits.state, 'done'), sql`${visits.doneAt} >= ${asked}`))),
    notExists(ctx.db.select({ one: sql`1` }).from(patients).where(and(eq(patients.id, messages.patientId), sql`${patients.diedOn} is not null`))),
    notExists(ctx.db.select({ one: sql`1` }).from(pathways).where(and(eq(pathways.id, messages.pathwayId), or(eq(pathways.state, 'closed'), eq(pathways.stage, 'discharge'))))),
  )
}
