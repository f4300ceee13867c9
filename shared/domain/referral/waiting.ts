const dayMs = 86_400_000
const weekMs = 7 * dayMs

export const waitStandings = ['within', 'could-pass', 'passed'] as const
export type WaitStanding = typeof waitStandings[number]

export interface WaitClock {
  /** Whole days since the referral arrived. A question to the referrer does not stop the clock. */
  waitedDays: number
  targetAt: Date
  /** If it were accepted now: half of the site's recent eyes had surgery by then. */
  expectedAt: Date
  standing: WaitStanding
}

/**
 * The wait of one referral against its site's target.
 * @param weeksToSurgery from acceptance to surgery, in weeks (the site's median, or its setting)
 */
export function waitClock({ referredAt, now, targetWeeks, weeksToSurgery }: { referredAt: Date, now: Date, targetWeeks: number, weeksToSurgery: number }): WaitClock {
  const targetAt = new Date(referredAt.getTime() + targetWeeks * weekMs)
  const expectedAt = new Date(now.getTime() + weeksToSurgery * weekMs)
  const standing = now > targetAt ? 'passed' : expectedAt > targetAt ? 'could-pass' : 'within'
  return { waitedDays: Math.max(0, Math.floor((now.getTime() - referredAt.getTime()) / dayMs)), targetAt, expectedAt, standing }
}

/** What a referral lacks before it can be accepted and the patient told, in the order in which it is asked for. */
export const missingParts = ['red-flags', 'telephone', 'message-consent'] as const
export type MissingPart = typeof missingParts[number]

export const missingLabels: Readonly<Record<MissingPart, string>> = {
  'red-flags': 'pain, flashes or sudden loss: not answered',
  'telephone': 'telephone number',
  'message-consent': 'consent to messages',
}
