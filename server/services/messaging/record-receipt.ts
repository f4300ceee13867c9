import { and, eq, or } from 'drizzle-orm'
import { z } from 'zod'
import { messageEvents, messages } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { fallBackToEmail } from '#server/services/messaging/fall-back'

export interface Receipt { providerId: string, status: string, errorCode?: string, marker: string | null }

/** A receipt may come late, twice, out of order, or before our own record of the send. The state never moves backwards. */
export async function recordReceipt(ctx: SystemContext, receipt: Receipt): Promise<void> {
  const state = receipt.status === 'delivered' ? 'delivered' : receipt.status === 'undelivered' || receipt.status === 'failed' ? 'failed' : undefined
  if (!state || !receipt.providerId) return
  const marker = receipt.marker && z.uuid().safeParse(receipt.marker).success ? receipt.marker : undefined
  const changed = await ctx.db.transaction(async (tx) => {
    const [row] = await tx.select().from(messages).where(or(eq(messages.providerId, receipt.providerId), marker ? and(eq(messages.id, marker)) : undefined)).for('update')
    if (!row || row.state === state || row.state === 'delivered') return undefined
    await tx.update(messages).set({ state, providerId: receipt.providerId, leaseUntil: null, inDoubtSince: null, ...(state === 'delivered' ? { deliveredAt: ctx.now } : { lastError: `not delivered (${receipt.errorCode ?? 'no reason given'})` }) }).where(eq(messages.id, row.id))
    await tx.insert(messageEvents).values({ messageId: row.id, at: ctx.now, kind: state === 'delivered' ? 'delivered' : 'not-delivered', detail: receipt.errorCode ? { errorCode: receipt.errorCode } : {} })
    if (state === 'failed') await fallBackToEmail(tx, row, ctx.now)
    return row
  })
  if (changed) await notifyLive(ctx.db, 'message', changed.siteId, [changed.id])
}
