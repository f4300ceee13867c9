import type { referrals } from '#server/db/schema/index'

export function presentReferral(row: typeof referrals.$inferSelect) {
  return { referrer: row.referrer, referrerEmail: row.referrerEmail, source: row.source, reason: row.reason, visionRight: row.visionRight, visionLeft: row.visionLeft, redFlags: row.redFlags, triageDecision: row.triageDecision, triageNote: row.triageNote, triagedAt: row.triagedAt?.toISOString() ?? null, rowVersion: row.rowVersion }
}
export type ReferralView = ReturnType<typeof presentReferral>
