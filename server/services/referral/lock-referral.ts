import { eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { referrals } from '#server/db/schema/index'
import { DomainError } from '#shared/domain/errors'

/** The referral of a pathway, locked, as the caller saw it; else what it is now. */
export async function lockReferral(tx: Transaction, pathwayId: string, rowVersion: number) {
  const [referral] = await tx.select().from(referrals).where(eq(referrals.pathwayId, pathwayId)).for('update')
  if (!referral) throw new DomainError('referral.not-found', 'This pathway has no referral.')
  if (referral.rowVersion !== rowVersion) {
    throw new DomainError('referral.stale', 'Somebody changed this referral meanwhile. Look at it again.', { detail: { current: { redFlags: referral.redFlags, triageDecision: referral.triageDecision, triageNote: referral.triageNote, referrerEmail: referral.referrerEmail, rowVersion: referral.rowVersion } } })
  }
  return referral
}
