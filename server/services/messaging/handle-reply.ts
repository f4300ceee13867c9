import { and, eq, inArray, isNull, or } from 'drizzle-orm'
import { inboundTexts, messageEvents, messages } from '#server/db/schema/index'
import { mayWrite, replySites } from '#server/policies/messaging'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

/** Takes a reply off the list, with what was done. The first of two people who do so is kept; the other is told. */
export async function handleReply(ctx: ServiceContext, input: { id: string, words: string }): Promise<void> {
  const siteId = await ctx.db.transaction(async (tx) => {
    const sites = replySites(ctx.actor)
    const [row] = await tx.select().from(inboundTexts).where(and(eq(inboundTexts.id, input.id), or(inArray(inboundTexts.siteId, sites), isNull(inboundTexts.siteId)))).for('update')
    if (!row || !sites.length) throw new DomainError('messaging.not-found', 'There is no such reply.')
    if (row.siteId ? !mayWrite(ctx.actor, row.siteId) : !sites.some(site => mayWrite(ctx.actor, site))) throw new DomainError('messaging.not-allowed', 'You may not settle replies at this site.')
    const [handled] = await tx.update(inboundTexts).set({ handledBy: ctx.actor.personId, handledAt: ctx.now, handledWords: input.words }).where(and(eq(inboundTexts.id, row.id), isNull(inboundTexts.handledAt))).returning({ id: inboundTexts.id })
    if (!handled) throw new DomainError('messaging.stale', 'Somebody settled this reply meanwhile.', { detail: { current: { handledAt: row.handledAt?.toISOString(), handledWords: row.handledWords } } })
    await appendAudit(tx, { at: ctx.now, event: 'messaging.reply-handled', personId: ctx.actor.personId, subjectKind: 'reply', subjectId: row.id, siteId: row.siteId })
    return row.siteId
  })
  await notifyLive(ctx.db, 'message', siteId, [input.id])
}

/** A message that reached nobody, or that may only be a call, was settled by telephone. */
export async function settleMessage(ctx: ServiceContext, input: { id: string, words: string }): Promise<void> {
  const siteId = await ctx.db.transaction(async (tx) => {
    const [row] = await tx.select().from(messages).where(and(eq(messages.id, input.id), inArray(messages.siteId, replySites(ctx.actor)))).for('update')
    if (!row?.siteId) throw new DomainError('messaging.not-found', 'There is no such message.')
    if (!mayWrite(ctx.actor, row.siteId)) throw new DomainError('messaging.not-allowed', 'You may not settle messages at this site.')
    if (row.state !== 'failed' && row.state !== 'held') throw new DomainError('messaging.stale', 'This message was settled meanwhile.', { detail: { current: { state: row.state } } })
    await tx.update(messages).set({ state: 'withdrawn' }).where(eq(messages.id, row.id))
    await tx.insert(messageEvents).values({ messageId: row.id, at: ctx.now, kind: 'settled', detail: { words: input.words, by: ctx.actor.personId } })
    await appendAudit(tx, { at: ctx.now, event: 'messaging.reply-handled', personId: ctx.actor.personId, subjectKind: 'message', subjectId: row.id, siteId: row.siteId })
    return row.siteId
  })
  await notifyLive(ctx.db, 'message', siteId, [input.id])
}
