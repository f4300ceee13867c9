import { and, asc, eq, inArray, isNull, lte, or, sql } from 'drizzle-orm'
import { messageEvents, messages } from '#server/db/schema/index'
import { sendMail } from '#server/gateways/mail'
import { findText, sendText } from '#server/gateways/text'
import type { SendResult } from '#server/gateways/text'
import { notifyLive } from '#server/services/audit/notify-live'
import { fallBackToEmail } from '#server/services/messaging/fall-back'
import type { SystemContext } from '#server/services/context'

type Row = typeof messages.$inferSelect
/** `late`: not with the provider, and past its purpose while it was in doubt. */
type Outcome = SendResult | { outcome: 'late', why: string }

const batch = 25
const leaseMs = 60_000
const mostAttempts = 6

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
    if (!due.length) return []
    await tx.update(messages).set({ state: 'sending', leaseUntil: new Date(ctx.now.getTime() + leaseForMs), inDoubtSince: sql`coalesce(${messages.inDoubtSince}, ${ctx.now.toISOString()}::timestamptz)`, attempts: sql`${messages.attempts} + 1` }).where(inArray(messages.id, due.map(row => row.id)))
    await tx.insert(messageEvents).values(due.map(row => ({ messageId: row.id, at: ctx.now, kind: 'attempt', detail: { attempt: row.attempts + 1 } })))
    return due.map(row => ({ ...row, attempts: row.attempts + 1, wasInDoubt: row.inDoubtSince !== null }))
  })
}

async function sendOne(ctx: SystemContext, row: Row & { wasInDoubt: boolean }, clock: () => Date): Promise<void> {
  const result = row.channel === 'text' ? await sendTextOnce(row, ctx.now) : row.expiresAt <= ctx.now ? late : await sendMail({ id: row.id, to: row.toAddress, subject: row.subject, body: row.body, calendar: row.calendar })
  await record(ctx, row, result, clock())
}

const late: Outcome = { outcome: 'late', why: 'too late to be of use' }

async function sendTextOnce(row: Row & { wasInDoubt: boolean }, now: Date): Promise<Outcome> {
  const text = { to: row.toAddress, body: row.body, marker: row.id, notBefore: row.inDoubtSince ?? now }
  if (row.wasInDoubt) {
    try {
      const known = await findText(text)
      if (known) return { outcome: 'sent', providerId: known }
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
    else if (result.outcome === 'late') {
      await tx.update(messages).set({ state: 'expired', leaseUntil: null, inDoubtSince: null, lastError: result.why }).where(stillOurs)
    }
    else if (result.outcome === 'refused' && (result.permanent || row.attempts >= mostAttempts)) {
      await tx.update(messages).set({ state: 'failed', leaseUntil: null, inDoubtSince: null, lastError: result.why }).where(stillOurs)
      await fallBackToEmail(tx, row, at)
    }
    else {
      // Still to be sent: later, and when in doubt only after the provider has been asked.
      const waitMs = Math.min(5 * 60_000, 2_000 * 2 ** row.attempts)
      await tx.update(messages).set({ state: 'queued', leaseUntil: new Date(at.getTime() + waitMs), inDoubtSince: result.outcome === 'unknown' ? sql`${messages.inDoubtSince}` : null, lastError: result.why }).where(stillOurs)
    }
    await tx.insert(messageEvents).values({ messageId: row.id, at, kind: result.outcome === 'sent' ? 'sent' : 'not-sent', detail: result.outcome === 'sent' ? {} : { why: result.why } })
  })
}

/** A message past its purpose is never sent late: it expires, and shows as expired. One in doubt is settled first. */
async function expireLate(ctx: SystemContext, now: Date): Promise<void> {
  await ctx.db.transaction(async (tx) => {
    const late = await tx.update(messages).set({ state: 'expired' }).where(and(inArray(messages.state, ['queued', 'held']), lte(messages.expiresAt, now), isNull(messages.inDoubtSince))).returning({ id: messages.id })
    if (late.length) await tx.insert(messageEvents).values(late.map(row => ({ messageId: row.id, at: now, kind: 'expired' })))
  })
}
