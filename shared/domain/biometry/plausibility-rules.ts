import { fieldLimits, meanCornealPowerD } from '#shared/domain/biometry/limits'
import { completeConstants } from '#shared/domain/biometry/lens-power/constants'
import { powerForRefraction } from '#shared/domain/biometry/lens-power/optics'
import { srkT } from '#shared/domain/biometry/lens-power/srk-t'
import type { EyeBiometry, SourceLabel } from '#shared/domain/biometry/vocabulary'

const holladay1988 = 'Holladay JT et al. J Cataract Refract Surg 1988;14:17-24, data screening criteria'
const audit2010 = 'Knox Cartwright NE et al. Eye 2010;24:894-900, 55 567 operations'
const population = 'Means of adult eyes in ten countries, three standard deviations either side (Eye, Global metrics on ocular biometry)'

/** What a rule measured, and beyond which limits it asks to repeat or explain. Undefined: not measured. */
export interface Reading { value: number, min?: number, max?: number }

/** Binary fractions: 24.10 less 23.80 is not to count as more than 0.3. */
const tolerance = 1e-9

export const isOutside = ({ value, min, max }: Reading): boolean => (min !== undefined && value < min - tolerance) || (max !== undefined && value > max + tolerance)

export interface PlausibilityRule {
  id: string
  version: number
  fields: readonly (keyof EyeBiometry)[]
  /** The threshold as a person reads it. */
  threshold: string
  unit: string
  source: string
  sourceLabel: SourceLabel
  /** Says what is unusual; the value and its unit are filled in. */
  sentence: (value: string) => string
}

export interface OneEyeRule extends PlausibilityRule { read: (eye: EyeBiometry) => Reading | undefined }
export interface TwoEyeRule extends PlausibilityRule { read: (eye: EyeBiometry, fellow: EyeBiometry) => Reading | undefined }

const optional = (value: number | undefined, limits: { min?: number, max?: number }): Reading | undefined => value === undefined || value === null ? undefined : { value, ...limits }

/** Angle between two meridians, 0 to 90 degrees. */
export const meridianAngle = (a: number, b: number) => {
  const turn = Math.abs(a - b) % 180
  return Math.min(turn, 180 - turn)
}

/** Corneal astigmatism below this has no meridian worth comparing. */
const roundCorneaD = 0.5

export const oneEyeRules: readonly OneEyeRule[] = [
  {
    id: 'axial-length.unusual', version: 1, fields: ['axialLengthMm'], threshold: '21.30 to 26.60 mm', unit: 'mm', source: audit2010, sourceLabel: 'from memory',
    sentence: value => `Axial length ${value} is unusual. Measure again, and look at the other eye.`,
    read: eye => ({ value: eye.axialLengthMm, min: 21.3, max: 26.6 }),
  },
  {
    id: 'axial-length.readings-differ', version: 1, fields: ['axialLengthSdMm'], threshold: 'at most 0.05 mm', unit: 'mm', source: 'Repeated optical readings agree to about 0.02 mm', sourceLabel: 'common practice',
    sentence: value => `The axial length readings do not agree: SD ${value}. Measure again.`,
    read: eye => optional(eye.axialLengthSdMm, { max: 0.05 }),
  },
  {
    id: 'cornea.mean-unusual', version: 1, fields: ['k1D', 'k2D'], threshold: '41 to 47 D', unit: 'D', source: audit2010, sourceLabel: 'from memory',
    sentence: value => `Mean corneal power ${value} is unusual. Measure again; ask about contact lenses and earlier corneal surgery.`,
    read: eye => ({ value: meanCornealPowerD(eye), min: 41, max: 47 }),
  },
  {
    id: 'cornea.astigmatism-large', version: 1, fields: ['k1D', 'k2D'], threshold: 'at most 2.50 D', unit: 'D', source: audit2010, sourceLabel: 'from memory',
    sentence: value => `The two corneal powers differ by ${value}. Measure again and consider topography.`,
    read: eye => ({ value: Math.abs(eye.k2D - eye.k1D), max: 2.5 }),
  },
  {
    id: 'cornea.meridians-not-square', version: 1, fields: ['k1AxisDegrees', 'k2AxisDegrees'], threshold: 'at least 80 degrees apart when K1 and K2 differ by 0.50 D', unit: 'degrees', source: 'DICOM PS3.3 C.8.25.10: steep and flat are 90 degrees apart; 10 degrees allowed', sourceLabel: 'common practice',
    sentence: value => `The steep and flat meridians are ${value} apart, not 90. Check the axes; if they are right the cornea is irregular.`,
    read: eye => ({ value: meridianAngle(eye.k1AxisDegrees, eye.k2AxisDegrees), ...(Math.abs(eye.k2D - eye.k1D) >= roundCorneaD ? { min: 80 } : {}) }),
  },
  {
    id: 'cornea.k1-steeper', version: 1, fields: ['k1D', 'k2D'], threshold: 'K1 no more than K2', unit: 'D', source: 'K1 is the flat meridian', sourceLabel: 'common practice',
    sentence: value => `K1 is steeper than K2 by ${value}. Check that powers and axes were not exchanged.`,
    read: eye => ({ value: Math.max(0, eye.k1D - eye.k2D), max: 0 }),
  },
  {
    id: 'chamber-depth.unusual', version: 1, fields: ['anteriorChamberDepthMm'], threshold: '1.69 to 4.51 mm', unit: 'mm', source: population, sourceLabel: 'citation',
    sentence: value => `Chamber depth ${value} is unusual. Measure again; Haigis depends on it.`,
    read: eye => optional(eye.anteriorChamberDepthMm, { min: 1.69, max: 4.51 }),
  },
  {
    id: 'lens-thickness.unusual', version: 1, fields: ['lensThicknessMm'], threshold: '3.08 to 5.66 mm', unit: 'mm', source: population, sourceLabel: 'citation',
    sentence: value => `Lens thickness ${value} is unusual. Check on the scan that both lens surfaces were found.`,
    read: eye => optional(eye.lensThicknessMm, { min: 3.08, max: 5.66 }),
  },
  {
    id: 'white-to-white.unusual', version: 1, fields: ['whiteToWhiteMm'], threshold: '10.54 to 13.06 mm', unit: 'mm', source: population, sourceLabel: 'citation',
    sentence: value => `White to white ${value} is unusual. Look at the picture, or measure by hand.`,
    read: eye => optional(eye.whiteToWhiteMm, { min: 10.54, max: 13.06 }),
  },
  {
    id: 'lengths.do-not-add-up', version: 1, fields: ['axialLengthMm', 'anteriorChamberDepthMm', 'lensThicknessMm'], threshold: 'at least 10 mm behind the lens', unit: 'mm', source: 'Cornea, chamber, lens and vitreous add up to the axial length', sourceLabel: 'proposed',
    sentence: value => `Chamber and lens leave only ${value} behind the lens. One of the three lengths is wrong.`,
    read: eye => eye.anteriorChamberDepthMm === undefined || eye.lensThicknessMm === undefined ? undefined : { value: eye.axialLengthMm - eye.anteriorChamberDepthMm - eye.lensThicknessMm, min: 10 },
  },
  {
    id: 'index.unusual', version: 1, fields: ['keratometricIndex'], threshold: '1.3315 to 1.3380', unit: '', source: 'Indices that keratometers use: 1.3375, 1.336, 1.333, 1.332, 1.3315', sourceLabel: 'common practice',
    sentence: value => `Keratometric index ${value} is unusual. Read it again from the printout.`,
    read: eye => ({ value: eye.keratometricIndex ?? 1.3375, min: 1.3315, max: 1.338 }),
  },
]

/** A constant only moves both eyes alike: the difference between two eyes hardly depends on it. */
const anyLens = completeConstants({ aConstant: 118.7 })
const lengthDifference = (eye: EyeBiometry, fellow: EyeBiometry) => Math.abs(eye.axialLengthMm - fellow.axialLengthMm)
const meanKDifference = (eye: EyeBiometry, fellow: EyeBiometry) => Math.abs(meanCornealPowerD(eye) - meanCornealPowerD(fellow))
const bothMeasured = (a: number | undefined, b: number | undefined, max: number): Reading | undefined => a === undefined || b === undefined || a === null || b === null ? undefined : { value: Math.abs(a - b), max }

/** SRK/T power for no refraction, or undefined where the formula has no answer. */
function emmetropicPowerD(eye: EyeBiometry): number | undefined {
  try {
    return powerForRefraction(srkT(eye, anyLens).optics, 0)
  }
  catch {
    return undefined
  }
}

export const interocularLimits = { axialLengthMm: 0.3, meanKD: 0.92, emmetropicPowerD: 1 }

export const twoEyeRules: readonly TwoEyeRule[] = [
  {
    id: 'eyes.length-differs', version: 1, fields: ['axialLengthMm'], threshold: 'at most 0.3 mm', unit: 'mm', source: `${holladay1988}; the audit in Eye 2010;24:894-900 uses 0.70 mm`, sourceLabel: 'from memory',
    sentence: value => `The eyes differ by ${value} in length. Measure both again, or say what explains it.`,
    read: (eye, fellow) => ({ value: lengthDifference(eye, fellow), max: interocularLimits.axialLengthMm }),
  },
  {
    id: 'eyes.cornea-differs', version: 1, fields: ['k1D', 'k2D'], threshold: 'at most 0.92 D', unit: 'D', source: `${audit2010}; Holladay 1988 uses 1 D`, sourceLabel: 'from memory',
    sentence: value => `The mean corneal powers of the two eyes differ by ${value}. Measure both again.`,
    read: (eye, fellow) => ({ value: meanKDifference(eye, fellow), max: interocularLimits.meanKD }),
  },
  {
    id: 'eyes.lens-power-differs', version: 1, fields: ['axialLengthMm', 'k1D', 'k2D'], threshold: 'at most 1 D, asked when neither length nor cornea differs by itself', unit: 'D', source: holladay1988, sourceLabel: 'from memory',
    sentence: value => `Length and cornea together would call for lenses ${value} apart. Measure both eyes again.`,
    read: (eye, fellow) => {
      const [one, other] = [emmetropicPowerD(eye), emmetropicPowerD(fellow)]
      if (one === undefined || other === undefined) return undefined
      const named = isOutside({ value: lengthDifference(eye, fellow), max: interocularLimits.axialLengthMm }) || isOutside({ value: meanKDifference(eye, fellow), max: interocularLimits.meanKD })
      return { value: Math.abs(one - other), ...(named ? {} : { max: interocularLimits.emmetropicPowerD }) }
    },
  },
  {
    id: 'eyes.chamber-differs', version: 1, fields: ['anteriorChamberDepthMm'], threshold: 'at most 0.3 mm', unit: 'mm', source: 'Test and retest lie within 0.2 mm (J Cataract Refract Surg 2010;36:1474-1478); 0.1 mm more for two eyes', sourceLabel: 'proposed',
    sentence: value => `The chamber depths differ by ${value}. Measure again; think of a loose lens or angle closure.`,
    read: (eye, fellow) => bothMeasured(eye.anteriorChamberDepthMm, fellow.anteriorChamberDepthMm, 0.3),
  },
  {
    id: 'eyes.lens-thickness-differs', version: 1, fields: ['lensThicknessMm'], threshold: 'at most 0.5 mm', unit: 'mm', source: 'About one standard deviation of the population between two eyes of a person', sourceLabel: 'proposed',
    sentence: value => `The lens thicknesses differ by ${value}. Check the scans.`,
    read: (eye, fellow) => bothMeasured(eye.lensThicknessMm, fellow.lensThicknessMm, 0.5),
  },
  {
    id: 'eyes.white-to-white-differs', version: 1, fields: ['whiteToWhiteMm'], threshold: 'at most 0.5 mm', unit: 'mm', source: 'A lid shadow is likelier than two corneas of different size', sourceLabel: 'common practice',
    sentence: value => `White to white differs by ${value} between the eyes. Look at both pictures.`,
    read: (eye, fellow) => bothMeasured(eye.whiteToWhiteMm, fellow.whiteToWhiteMm, 0.5),
  },
  {
    id: 'eyes.index-differs', version: 1, fields: ['keratometricIndex'], threshold: 'the same index for both eyes', unit: '', source: 'One device measures both corneas', sourceLabel: 'common practice',
    sentence: value => `The keratometric indices of the two eyes differ by ${value}. Measure both eyes on one device.`,
    read: (eye, fellow) => ({ value: Math.abs((eye.keratometricIndex ?? 1.3375) - (fellow.keratometricIndex ?? 1.3375)), max: 0 }),
  },
  {
    id: 'eyes.values-copied', version: 1, fields: ['axialLengthMm', 'k1D', 'k2D'], threshold: 'fewer than 3 of length, K1 and K2 equal to the last digit', unit: '', source: 'Two eyes of a person are alike, not equal', sourceLabel: 'common practice',
    sentence: () => 'Length, K1 and K2 are the same in both eyes to the last digit. One eye may have been typed twice.',
    read: (eye, fellow) => ({ value: [eye.axialLengthMm === fellow.axialLengthMm, eye.k1D === fellow.k1D, eye.k2D === fellow.k2D].filter(Boolean).length, max: 2 }),
  },
]

/** The span over which any value may be stored; outside it the answer is `refuse`. */
export const storableRule: PlausibilityRule = {
  id: 'value.cannot-be-stored', version: 1, fields: Object.keys(fieldLimits) as (keyof EyeBiometry)[], threshold: 'limits of each field', unit: '', source: 'No eye has such a value, or a known slip of units explains it', sourceLabel: 'common practice',
  sentence: () => 'A value cannot be stored.',
}
