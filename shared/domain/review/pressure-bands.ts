import type { Urgency } from '#shared/domain/pathway/vocabulary'
import type { RiskReason } from '#shared/domain/review/vocabulary'

/** What one row of the pressure table asks for. Absent: nothing is raised. */
export interface PressureAction {
  urgency: Urgency
  /** Latest hours until the pressure is measured again, when the row asks for it. */
  recheckWithinHours?: number
}

export interface PressureBand {
  id: 'very-low' | 'low' | 'usual' | 'upper' | 'raised' | 'high' | 'very-high' | 'severe'
  fromMmHg: number
  /** Last whole mmHg of the row. */
  toMmHg: number
  otherEyes?: PressureAction
  eyesAtRisk?: PressureAction
  /** Replaces both when the wound leaks or the chamber is shallow or flat. */
  withLeakOrShallow?: PressureAction
  source: string
}

const recheck48: PressureAction = { urgency: 'this-week', recheckWithinHours: 48 }

/**
 * Pressure after surgery, lowest row first. Starting values: a site's clinical lead signs them before use.
 * Anchors: 5 or less is the commonest definition of hypotony; below 8 suspicious for a leak; 28 and 40 in Ahmed et al.
 * 2002, J Cataract Refract Surg 28:100-108; "most eyes above 30 should be treated", Wills Eye Manual, 8th edition.
 */
export const pressureBands: readonly PressureBand[] = [
  { id: 'very-low', fromMmHg: 0, toMmHg: 5, otherEyes: { urgency: 'today' }, eyesAtRisk: { urgency: 'today' }, withLeakOrShallow: { urgency: 'now' }, source: 'proposed; 5 mmHg as hypotony is the commonest definition' },
  { id: 'low', fromMmHg: 6, toMmHg: 7, otherEyes: recheck48, eyesAtRisk: recheck48, withLeakOrShallow: { urgency: 'today' }, source: 'proposed; below 8 mmHg suspicious for a wound leak' },
  { id: 'usual', fromMmHg: 8, toMmHg: 21, source: 'common practice' },
  { id: 'upper', fromMmHg: 22, toMmHg: 24, eyesAtRisk: recheck48, source: 'proposed' },
  { id: 'raised', fromMmHg: 25, toMmHg: 29, otherEyes: { urgency: 'this-week' }, eyesAtRisk: recheck48, source: 'proposed; Ahmed 2002' },
  { id: 'high', fromMmHg: 30, toMmHg: 34, otherEyes: { urgency: 'today' }, eyesAtRisk: { urgency: 'today' }, source: 'Wills Eye Manual, 8th edition; proposed' },
  { id: 'very-high', fromMmHg: 35, toMmHg: 39, otherEyes: { urgency: 'today' }, eyesAtRisk: { urgency: 'now' }, source: 'proposed' },
  { id: 'severe', fromMmHg: 40, toMmHg: 80, otherEyes: { urgency: 'now' }, eyesAtRisk: { urgency: 'now' }, source: 'Ahmed 2002; proposed' },
]

/** Why an eye is at risk, in the words of the sheet. */
export const riskReasonLabels: Readonly<Record<RiskReason, string>> = {
  'glaucoma': 'glaucoma',
  'ocular-hypertension': 'ocular hypertension',
  'disc-damage': 'disc damage',
  'only-eye': 'only seeing eye',
  'vein-occlusion': 'earlier vein occlusion',
  'optic-neuropathy': 'earlier optic nerve infarct',
  'steroid-response': 'known steroid response',
}

/** Limits beside the table, in mmHg, days and shares. */
export const pressureLimits = {
  leastMmHg: 0,
  mostMmHg: 80,
  /** Outside these the sheet asks again whether the number is right. */
  askAgainBelowMmHg: 4,
  askAgainAboveMmHg: 60,
  /** A rise over the pre-operative pressure that counts one row higher (reported categories of +10 and +20 mmHg). */
  riseCountsMmHg: 10,
  /** From here pain, vomiting or oedema make it `now`. */
  withSymptomsFromMmHg: 30,
  painFrom: 4,
  oedemaFrom: 2,
  /** Chang, Tan, Tripodis 2011, J Cataract Refract Surg: a rise over 25 % with at least 28 mmHg on steroid drops. */
  steroidFromDay: 14,
  steroidFromMmHg: 28,
  steroidRiseShare: 0.25,
} as const

/** The same limits with values of a site, which may be tighter. */
export type PressureLimits = { readonly [Name in keyof typeof pressureLimits]: number }

/** `5 mmHg or less`, `30 to 34 mmHg`, `40 mmHg or more`. */
export function bandRange(band: PressureBand): string {
  if (band.fromMmHg === pressureLimits.leastMmHg) return `${band.toMmHg} mmHg or less`
  if (band.toMmHg === pressureLimits.mostMmHg) return `${band.fromMmHg} mmHg or more`
  return `${band.fromMmHg} to ${band.toMmHg} mmHg`
}

const urgencyWords: Readonly<Record<Urgency, string>> = { 'now': 'Now', 'today': 'Today', 'this-week': 'This week' }

function actionWords(action: PressureAction | undefined): string {
  if (!action) return 'Nothing is raised'
  return action.recheckWithinHours ? `${urgencyWords[action.urgency]}, measure again in 24 to ${action.recheckWithinHours} hours` : urgencyWords[action.urgency]
}

/** The table in words, lowest row first, for an eye with or without a reason for lower limits. */
export function pressureGradeDefinitions(atRisk: boolean, bands: readonly PressureBand[] = pressureBands): { id: PressureBand['id'], range: string, words: string }[] {
  return bands.map((band) => {
    const words = actionWords(atRisk ? band.eyesAtRisk : band.otherEyes)
    const leak = band.withLeakOrShallow ? `; ${urgencyWords[band.withLeakOrShallow.urgency].toLowerCase()} with a leak or a shallow chamber` : ''
    return { id: band.id, range: bandRange(band), words: words + leak }
  })
}
