import { and, eq, sql } from 'drizzle-orm'
import { messages, referrals } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { origin } from '#server/services/messaging/patient-link'
import { queueLetter } from '#server/services/messaging/queue-messages'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { DomainError } from '#shared/domain/errors'

/** Queues the mail that tells the referrer that the letter is ready. Discharge waits until it has left, not until it is queued. */
export async function sendDischargeLetter(ctx: ServiceContext, input: { pathwayId: string, rowVersion: number }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { ...input, act: 'sendLetter', refusal: 'A coordinator or surgeon of this site sends the letter.' })
    requireOpen(loaded.pathway)
    if (loaded.pathway.stage !== 'follow-up' && loaded.pathway.stage !== 'discharge') throw new DomainError('pathway.transition-not-allowed', 'The discharge letter goes out at follow-up.')
    const [referral] = await tx.select().from(referrals).where(eq(referrals.pathwayId, loaded.pathway.id))
    if (!referral?.referrerEmail) throw new DomainError('referral.no-address', 'The referral has no e-mail address of the referrer. Add it first.', { fields: [{ field: 'referrerEmail', code: 'required', message: 'Add the e-mail address of the referrer.' }] })
    const [before] = await tx.select({ n: sql<number>`count(*)::int` }).from(messages).where(and(eq(messages.pathwayId, loaded.pathway.id), eq(messages.kind, 'letter.sent')))
    const version = (before?.n ?? 0) + 1
    await queueLetter(tx, { pathway: loaded.pathway, site: loaded.site, toEmail: referral.referrerEmail, link: `${origin()}/pathways/${loaded.pathway.id}`, version, now: ctx.now })
    return recordEvent(tx, ctx, loaded, { kind: 'letter-queued', words: `Discharge letter to ${referral.referrer}`, audit: 'outcome.letter-sent', payload: { version } })
  })
  await notifyLive(ctx.db, 'message', changed.siteId, [changed.id])
  return changed
}
