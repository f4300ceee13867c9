import { and, asc, eq, inArray, isNull, lte, or, sql } from 'drizzle-orm'
import { messageEvents, messages } from '#server/db/schema/index'
import { sendMail } from '#server/gateways/mail'
import { findText, sendText } from '#server/gateways/text'
import type { SendResult } from '#server/gateways/text'
import { notifyLive } from '#server/services/audit/notify-live'
import { fallBackToEmail } from '#server/services/messaging/fall-back'
import { screenDue } from '#server/services/messaging/screen-due'
import type { SystemContext } from '#server/services/context'

type Row = typeof messages.$inferSelect
/** `late`: not with the provider, and past its purpose while it was in doubt. */
/** `not-there`: was in doubt, and the provider does not have it: it goes back to the queue, where every question is asked again. */
type Outcome = SendResult | { outcome: 'late', why: string } | { outcome: 'not-there', why: string }

const batch = 25
const leaseMs = 60_000
const mostAttempts = 6
/** About ten minutes of not knowing, then a person rings: nobody waits for a provider that answers nothing. */
const mostTriesInDoubt = 8
const firstWaitMs = 2_000
const longestWaitMs = 5 * 60_000

/**
 * Sends what is due. A row is claimed, and the attempt marked, in a committed transaction before the provider is called;
 * the answer is recorded after it. A row left in doubt by a crash is looked up at the provider before it is sent again.
 * Two senders never hold one row: the claim skips locked rows and a lease keeps it while the call is under way.
 */
export async function sendDueMessages(ctx: SystemContext, clock: () => Date, leaseForMs = leaseMs): Promise<number> {
  await expireLate(ctx, ctx.now)
  const claimed = await claim(ctx, leaseForMs)
  await Promise.all(claimed.map(row => sendOne(ctx, row, clock)))
  if (claimed.length) await notifyLive(ctx.db, 'message', null, claimed.map(row => row.id))
  return claimed.length
}

async function claim(ctx: SystemContext, leaseForMs: number): Promise<(Row & { wasInDoubt: boolean })[]> {
  return ctx.db.transaction(async (tx) => {
    const due = await tx.select().from(messages)
      .where(and(inArray(messages.state, ['queued', 'sending']), lte(messages.dueAt, ctx.now), or(isNull(messages.leaseUntil), lte(messages.leaseUntil, ctx.now))))
      .orderBy(asc(messages.dueAt), asc(messages.id)).limit(batch).for('update', { skipLocked: true })
    const leaving = await screenDue(tx, due, ctx.now)
    if (!leaving.length) return []
    await tx.update(messages).set({ state: 'sending', leaseUntil: new Date(ctx.now.getTime() + leaseForMs), inDoubtSince: sql`coalesce(${messages.inDoubtSince}, ${ctx.now.toISOString()}::timestamptz)`, attempts: sql`${messages.attempts} + 1` }).where(inArray(messages.id, leaving.map(row => row.id)))
    await tx.insert(messageEvents).values(leaving.map(row => ({ messageId: row.id, at: ctx.now, kind: 'attempt', detail: { attempt: row.attempts + 1 } })))
    return leaving.map(row => ({ ...row, attempts: row.attempts + 1, wasInDoubt: row.inDoubtSince !== null, inDoubtSince: row.inDoubtSince ?? ctx.now }))
  })
}

async function sendOne(ctx: SystemContext, row: Row & { wasInDoubt: boolean }, clock: () => Date): Promise<void> {
  await record(ctx, row, row.channel === 'text' ? await sendTextOnce(row, ctx.now) : await sendMailAgain(ctx, row), clock())
}

/**
 * Mail is at least once: a mail server cannot be asked whether it took a message whose answer was lost. The second copy carries
 * the same Message-ID, by which a mailbox may fold the two, and the history says that it may have arrived twice.
 */
async function sendMailAgain(ctx: SystemContext, row: Row & { wasInDoubt: boolean }): Promise<Outcome> {
  if (row.expiresAt <= ctx.now) return late
  if (row.wasInDoubt) await ctx.db.insert(messageEvents).values({ messageId: row.id, at: ctx.now, kind: 'sent-again', detail: { why: 'no answer came to the first copy; it may arrive twice' } })
  return sendMail({ id: row.id, to: row.toAddress, subject: row.subject, body: row.body, calendar: row.calendar })
}

const late: Outcome = { outcome: 'late', why: 'too late to be of use' }

async function sendTextOnce(row: Row & { wasInDoubt: boolean }, now: Date): Promise<Outcome> {
  const text = { to: row.toAddress, body: row.body, marker: row.id, notBefore: row.inDoubtSince ?? now }
  if (row.wasInDoubt) {
    try {
      const known = await findText(text)
      return known ? { outcome: 'sent', providerId: known } : row.expiresAt <= now ? late : { outcome: 'not-there', why: 'the text service does not have it' }
    }
    catch (error) {
      return { outcome: 'unknown', why: `the text service could not be asked: ${(error as Error).message}`.slice(0, 200) }
    }
  }
  return row.expiresAt <= now ? late : sendText(text)
}

async function record(ctx: SystemContext, row: Row, result: Outcome, at: Date): Promise<void> {
  // A receipt may have come before our own record: what it said stands.
  const stillOurs = and(eq(messages.id, row.id), eq(messages.state, 'sending'))
  await ctx.db.transaction(async (tx) => {
    if (result.outcome === 'sent') {
      await tx.update(messages).set({ state: sql`case when ${messages.state} in ('delivered', 'failed') then ${messages.state} else 'sent' end`, providerId: result.providerId, sentAt: at, leaseUntil: null, inDoubtSince: null, lastError: null }).where(eq(messages.id, row.id))
    }
    else {
      await tx.update(messages).set({ leaseUntil: null, inDoubtSince: null, lastError: result.why, ...afterNotSent(row, result, at) }).where(stillOurs)
      if (endsHere(row, result) && result.outcome === 'refused') await fallBackToEmail(tx, row, at)
    }
    await tx.insert(messageEvents).values({ messageId: row.id, at, kind: result.outcome === 'sent' ? 'sent' : 'not-sent', detail: result.outcome === 'sent' ? {} : { why: result.why } })
  })
}

function endsHere(row: Row, result: Outcome): boolean {
  return result.outcome === 'refused' ? result.permanent || row.attempts >= mostAttempts : result.outcome === 'unknown' && row.attempts >= mostTriesInDoubt
}

/** Where a message stands that did not leave, or of which nobody knows. */
function afterNotSent(row: Row, result: Exclude<Outcome, { outcome: 'sent' }>, at: Date): Partial<Row> {
  if (result.outcome === 'late') return { state: 'expired' }
  if (result.outcome === 'not-there') return { state: 'queued' }
  const inDoubtSince = result.outcome === 'unknown' ? row.inDoubtSince : null
  if (endsHere(row, result)) return { state: 'failed', inDoubtSince, ...(result.outcome === 'unknown' ? { lastError: 'It is not known whether this arrived. Ring.' } : {}) }
  // Still to be sent: later, and when in doubt only after the provider has been asked.
  return { state: 'queued', inDoubtSince, leaseUntil: new Date(at.getTime() + Math.min(longestWaitMs, firstWaitMs * 2 ** row.attempts)) }
}

/** A message past its purpose is never sent late: it expires, and shows as expired. One in doubt is settled first. */
async function expireLate(ctx: SystemContext, now: Date): Promise<void> {
  await ctx.db.transaction(async (tx) => {
    const late = await tx.update(messages).set({ state: 'expired' }).where(and(inArray(messages.state, ['queued', 'held']), lte(messages.expiresAt, now), isNull(messages.inDoubtSince))).returning({ id: messages.id })
    if (late.length) await tx.insert(messageEvents).values(late.map(row => ({ messageId: row.id, at: now, kind: 'expired' })))
  })
}
