import type { PupilSize, RiskFactorId, RiskFactors, Source, SurgeonGrade } from '#shared/domain/theatre/vocabulary'
import { isBrunescentOrWhite } from '#shared/domain/theatre/nuclear-density'

/**
 * The published model as a table. Narendran, Jaycock, Johnston et al., The Cataract National Dataset electronic
 * multicentre audit of 55,567 operations: risk stratification for posterior capsule rupture and vitreous loss,
 * Eye 2009;23:31-37. The odds ratios were read in a page that reproduces the paper's table; the probability of the
 * reference eye (0.00736) and the overall rate (1.92 %) are from memory and are to be held against the paper.
 */
export const riskSource: Source = {
  text: 'Narendran et al., Eye 2009;23:31-37, 55,567 operations 2001-2006; reference probability 0.736 % from memory',
  label: 'citation',
}

/** Woman under 60, large pupil, eye shorter than 26 mm, consultant, nothing else. From memory. */
export const publishedReferenceProbability = 0.00736
/** Capsule rupture or vitreous loss in all 55,567 operations. From memory; 1067 of 55,567 agrees. */
export const publishedOverallProbability = 0.0192

/** The least and the greatest that a factor can multiply the odds by: what "absent" and "present" mean when it is not recorded. */
export interface FactorRow {
  id: RiskFactorId
  label: string
  least: number
  worst: number
  /** What the worst is, in words, for a factor that is not recorded. */
  worstLabel: string
  /** Odds ratio and words for this eye, or `undefined` when it is not recorded. */
  read: (factors: RiskFactors) => { oddsRatio: number, label: string } | undefined
}

export const ageBands = [
  { from: 90, oddsRatio: 2.37, label: 'Age 90 or over' },
  { from: 80, oddsRatio: 1.58, label: 'Age 80 to 89' },
  { from: 70, oddsRatio: 1.42, label: 'Age 70 to 79' },
  { from: 60, oddsRatio: 1.14, label: 'Age 60 to 69' },
  { from: 0, oddsRatio: 1, label: 'Age under 60' },
] as const

export const pupilOddsRatios: Record<PupilSize, number> = { large: 1, medium: 1.14, small: 1.45 }

export const surgeonOddsRatios: Record<SurgeonGrade, number> = {
  'consultant': 1,
  'associate-specialist': 0.87,
  'staff-grade': 0.36,
  'fellow': 1.65,
  'specialist-registrar': 1.6,
  'senior-house-officer': 3.73,
}

/** Either of two findings is enough; both must be denied before the pair counts as absent. */
function either(one: boolean | undefined, other: boolean | undefined): boolean | undefined {
  if (one || other) return true
  return one === undefined || other === undefined ? undefined : false
}

function yesNo(id: RiskFactorId, label: string, oddsRatio: number, present: (factors: RiskFactors) => boolean | undefined): FactorRow {
  return {
    id, label, least: 1, worst: oddsRatio, worstLabel: 'present',
    read: (factors) => {
      const found = present(factors)
      return found === undefined ? undefined : { oddsRatio: found ? oddsRatio : 1, label }
    },
  }
}

/** 26.0 mm itself is in the published band of long eyes. */
const longEye = (mm: number | undefined) => mm === undefined ? undefined : mm >= 26

export const factorTable: readonly FactorRow[] = [
  {
    id: 'age', label: 'Age', least: 1, worst: 2.37, worstLabel: 'age 90 or over',
    read: ({ ageYears }) => ageYears === undefined ? undefined : ageBands.find(band => ageYears >= band.from),
  },
  {
    id: 'sex', label: 'Sex', least: 1, worst: 1.28, worstLabel: 'male',
    read: ({ sex }) => sex === undefined ? undefined : { oddsRatio: sex === 'male' ? 1.28 : 1, label: sex === 'male' ? 'Male' : 'Female' },
  },
  yesNo('glaucoma', 'Glaucoma', 1.3, factors => factors.glaucoma),
  yesNo('diabetic-retinopathy', 'Diabetic retinopathy', 1.63, factors => factors.diabeticRetinopathy),
  yesNo('brunescent-or-white', 'Brunescent or white cataract', 2.99, isBrunescentOrWhite),
  yesNo('no-fundal-view', 'No fundal view or vitreous opacities', 2.46, factors => factors.noFundalView),
  yesNo('pseudoexfoliation-or-phacodonesis', 'Pseudoexfoliation or phacodonesis', 2.92, factors => either(factors.pseudoexfoliation, factors.weakZonules)),
  {
    id: 'pupil', label: 'Pupil', least: 1, worst: 1.45, worstLabel: 'small',
    read: ({ pupil }) => pupil === undefined ? undefined : { oddsRatio: pupilOddsRatios[pupil], label: `${pupil[0]!.toUpperCase()}${pupil.slice(1)} pupil` },
  },
  yesNo('long-eye', 'Axial length 26.0 mm or more', 1.47, factors => longEye(factors.axialLengthMm)),
  yesNo('alpha-blocker', 'Alpha-blocker', 1.51, factors => factors.alphaBlocker === undefined ? undefined : factors.alphaBlocker !== 'none'),
  yesNo('cannot-lie-flat', 'Cannot lie flat', 1.27, factors => factors.canLieFlat === undefined ? undefined : !factors.canLieFlat),
]
