import { eq, sql } from 'drizzle-orm'
import { referrals } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockReferral } from '#server/services/referral/lock-referral'
import type { ReferralBody } from '#shared/contracts/referral'
import { DomainError } from '#shared/domain/errors'

/** Corrects what a referral says: who refers and where letters go, why, and the answers to the red flags. */
export async function changeReferral(ctx: ServiceContext, { pathwayId, rowVersion, ...given }: ReferralBody & { pathwayId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { pathwayId, act: 'changeReferral', refusal: 'The team of this site corrects a referral.' })
    if (loaded.pathway.state === 'closed') throw new DomainError('pathway.closed', 'This pathway is closed.')
    const before = await lockReferral(tx, pathwayId, rowVersion)
    const flagsChanged = JSON.stringify({ ...before.redFlags, ...given.redFlags }) !== JSON.stringify(before.redFlags)
    // An accepted referral whose red flags read differently was accepted on other facts.
    if (flagsChanged && before.triageDecision === 'accepted') throw new DomainError('referral.conflict', 'The red flags were answered when the referral was accepted. A surgeon triages it again to change them.')
    const [referral] = await tx.update(referrals).set({ ...given, redFlags: { ...before.redFlags, ...given.redFlags }, rowVersion: sql`${referrals.rowVersion} + 1` }).where(eq(referrals.id, before.id)).returning()
    const pathway = await recordEvent(tx, ctx, loaded, { kind: 'referral-changed', words: 'Referral corrected', audit: 'referral.changed' })
    return { referral, pathway }
  })
  await notifyLive(ctx.db, 'pathway', done.pathway.siteId, [done.pathway.id])
  return done
}
