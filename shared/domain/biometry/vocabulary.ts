import type { Eye } from '#shared/domain/pathway/vocabulary'

/**
 * One set of measurements of one eye, as the biometer gives them. Everything optional is "not measured" when absent
 * and is never read as normal. K1 and K2 are the two principal corneal meridians, by custom the flat one first; no
 * formula here depends on the order.
 */
export interface EyeBiometry {
  eye: Eye
  /** Axial length in mm, 14 to 40. */
  axialLengthMm: number
  /** Standard deviation of the repeated axial length readings, in mm. */
  axialLengthSdMm?: number
  /** Corneal power in dioptres for `keratometricIndex`, 20 to 70. */
  k1D: number
  /** Meridian of K1 in degrees, 0 to 180, anticlockwise from the right as one faces the patient. */
  k1AxisDegrees: number
  k2D: number
  k2AxisDegrees: number
  /** The index with which the device turned radius into power; 1.3375 unless the printout says otherwise. */
  keratometricIndex?: number
  /** External depth in mm: front of the cornea to the front of the lens. */
  anteriorChamberDepthMm?: number
  lensThicknessMm?: number
  /** Horizontal corneal diameter in mm. */
  whiteToWhiteMm?: number
}

export const defaultKeratometricIndex = 1.3375

export const formulaIds = ['srk-t', 'holladay-1', 'hoffer-q', 'haigis'] as const
export type FormulaId = typeof formulaIds[number]

export const formulaLabels: Record<FormulaId, string> = {
  'srk-t': 'SRK/T',
  'holladay-1': 'Holladay 1',
  'hoffer-q': 'Hoffer Q',
  'haigis': 'Haigis',
}

/** Constants of one lens model. Only the A constant is needed; what is absent is converted from it and said to be. */
export interface LensConstants {
  /** SRK/T A constant, no unit, 110 to 125. */
  aConstant: number
  /** Holladay 1 surgeon factor in mm. */
  surgeonFactorMm?: number
  /** Hoffer Q personal anterior chamber depth in mm. */
  personalAcdMm?: number
  /** Haigis: lens position = a0 + a1 * chamber depth + a2 * axial length, in mm. */
  haigis?: { a0Mm: number, a1: number, a2: number }
}

/** One figure that a screen may show, with its unit ('' for a pure number). */
export interface NamedValue { name: string, value: number, unit: string }

/** Where a fact comes from. 'from memory': the publication is named, its text was not at hand when this was written. */
export const sourceLabels = ['citation', 'common practice', 'from memory', 'proposed', 'algebra'] as const
export type SourceLabel = typeof sourceLabels[number]

/** What a screen needs to show "How this is worked out". */
export interface HowWorkedOut {
  formula: string
  publication: string
  sourceLabel: SourceLabel
  inputs: NamedValue[]
  /** Intermediate figures in the order in which they are worked out. */
  steps: NamedValue[]
  /** Limits of the publication that acted on this eye, in words. */
  notes: string[]
}

export const plausibilityAnswers = ['pass', 'not-measured', 'warn', 'refuse'] as const
/** `warn`: repeat the measurement or explain it by name. `refuse`: not stored. `not-measured` is not a pass. */
export type PlausibilityAnswer = typeof plausibilityAnswers[number]
