import { identifierChecks } from '#shared/domain/patient/identifier'
import type { IdentifierCheck } from '#shared/domain/patient/identifier'

export interface ReferralSettings {
  identifierCheck: IdentifierCheck
  /** From referral to surgery, whole weeks, 1 to 104. */
  waitTargetWeeks: number
  /** From acceptance to surgery, weeks, 1 to 104, until the site's own eyes say. */
  weeksToSurgery: number
}

/**
 * Eighteen weeks from referral to treatment: the waiting standard of the NHS Constitution for England. Six weeks from acceptance
 * to surgery until the site has operated on five accepted eyes: 'common practice'.
 */
const defaults: ReferralSettings = { identifierCheck: 'none', waitTargetWeeks: 18, weeksToSurgery: 6 }

const weeks = (given: unknown, otherwise: number) => typeof given === 'number' && given >= 1 && given <= 104 ? given : otherwise

/** Reads the part of a site's settings that intake needs; what is missing or unreadable stands at its default. */
export function referralSettingsOf(settings: Readonly<Record<string, unknown>>): ReferralSettings {
  return {
    identifierCheck: identifierChecks.find(each => each === settings.identifierCheck) ?? defaults.identifierCheck,
    waitTargetWeeks: Math.round(weeks(settings.waitTargetWeeks, defaults.waitTargetWeeks)),
    weeksToSurgery: weeks(settings.weeksToSurgery, defaults.weeksToSurgery),
  }
}
