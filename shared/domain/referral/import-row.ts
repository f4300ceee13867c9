import type { Eye } from '#shared/domain/pathway/vocabulary'

export const importStates = ['checking', 'checked', 'committed', 'failed'] as const
export type ImportState = typeof importStates[number]

/** What becomes of one line: a new patient, a new pathway of somebody known, somebody to look at first, or nothing. */
export const rowFates = ['new', 'new-pathway', 'duplicate', 'error'] as const
export type RowFate = typeof rowFates[number]

export const fateLabels: Readonly<Record<RowFate, string>> = {
  'new': 'New patient',
  'new-pathway': 'New pathway of a known patient',
  'duplicate': 'Duplicate to look at',
  'error': 'Cannot be used',
}

/** One referral as a line of a file or a bundle says it, checked. */
export interface ImportedReferral {
  name: string
  /** `YYYY-MM-DD` */
  birthDate: string
  identifier: string | null
  phone: string | null
  email: string | null
  address: string
  messageConsent: boolean | null
  eyes: Eye[]
  priority: 'routine' | 'soon' | 'urgent'
  referrer: string
  referrerEmail: string | null
  reason: string
  visionRight: string | null
  visionLeft: string | null
  redFlags: Record<string, boolean>
  /** The day the referral was received, `YYYY-MM-DD`: the wait counts from it. Null: today. */
  referredOn: string | null
}
