import type { FormulaId, SourceLabel } from '#shared/domain/biometry/vocabulary'

/** What a publication prefers for one length of eye. A preference among formulas, never a power. */
export interface Preference {
  formulas: readonly FormulaId[]
  /** Lengths in mm for which it holds: above `from`, or from it when `fromIncluded`; likewise `to`. */
  from: number
  fromIncluded: boolean
  to: number
  toIncluded: boolean
  source: string
  sourceLabel: SourceLabel
  sentence: string
}

const nice = { source: 'NICE guideline NG77, Cataracts in adults: management, 2017, for eyes without earlier corneal refractive surgery', sourceLabel: 'from memory' as const }
const hoffer = { source: 'Hoffer KJ. J Cataract Refract Surg 1993;19:700-712', sourceLabel: 'citation' as const }

/** NICE gives 22.00 and 26.00 mm to the middle band; Hoffer's limits are read the same way (the paper does not say). */
const preferences: readonly Preference[] = [
  { ...nice, formulas: ['haigis', 'hoffer-q'], from: 0, fromIncluded: true, to: 22, toIncluded: false, sentence: 'Shorter than 22.00 mm: Haigis or Hoffer Q is preferred.' },
  { ...nice, formulas: ['srk-t'], from: 22, fromIncluded: true, to: 26, toIncluded: true, sentence: 'From 22.00 to 26.00 mm: SRK/T is preferred among these four.' },
  { ...nice, formulas: ['haigis', 'srk-t'], from: 26, fromIncluded: false, to: 100, toIncluded: true, sentence: 'Longer than 26.00 mm: Haigis or SRK/T is preferred.' },
  { ...hoffer, formulas: ['hoffer-q'], from: 0, fromIncluded: true, to: 22, toIncluded: false, sentence: 'Shorter than 22.0 mm: Hoffer Q.' },
  { ...hoffer, formulas: ['srk-t', 'holladay-1', 'hoffer-q'], from: 22, fromIncluded: true, to: 24.5, toIncluded: true, sentence: 'From 22.0 to 24.5 mm: the mean of SRK/T, Holladay 1 and Hoffer Q.' },
  { ...hoffer, formulas: ['holladay-1'], from: 24.5, fromIncluded: false, to: 26, toIncluded: true, sentence: 'From 24.5 to 26.0 mm: Holladay 1.' },
  { ...hoffer, formulas: ['srk-t'], from: 26, fromIncluded: false, to: 100, toIncluded: true, sentence: 'Longer than 26.0 mm: SRK/T.' },
]

const holds = (each: Preference, mm: number) => (each.fromIncluded ? mm >= each.from : mm > each.from) && (each.toIncluded ? mm <= each.to : mm < each.to)

/** The two published preferences for an eye of this length: the guideline first, then Hoffer's own advice. */
export function preferencesFor(axialLengthMm: number): Preference[] {
  return preferences.filter(each => holds(each, axialLengthMm))
}
