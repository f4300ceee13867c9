/** The words of risk and time in theatre. One list each; contracts, services and screens read these. */

export const sexes = ['female', 'male'] as const
export type Sex = typeof sexes[number]

/** After dilating drops, as the 2009 model names them: it gives no millimetres. */
export const pupilSizes = ['large', 'medium', 'small'] as const
export type PupilSize = typeof pupilSizes[number]

export const alphaBlockers = ['none', 'doxazosin', 'tamsulosin', 'other'] as const
export type AlphaBlocker = typeof alphaBlockers[number]

export const cataractKinds = ['usual', 'brunescent', 'white'] as const
export type CataractKind = typeof cataractKinds[number]

/** Grades as the 2009 paper names them; two of them are historical. */
export const surgeonGrades = ['consultant', 'associate-specialist', 'staff-grade', 'fellow', 'specialist-registrar', 'senior-house-officer'] as const
export type SurgeonGrade = typeof surgeonGrades[number]

/** Who may operate, least first. */
export const minimumGrades = ['any-supervised', 'experienced', 'consultant'] as const
export type MinimumGrade = typeof minimumGrades[number]

/** How hard the nucleus is to break up, easiest first. Past cases are sorted by it. */
export const difficulties = ['routine', 'firm', 'dense'] as const
export type Difficulty = typeof difficulties[number]

/** LOCS III nuclear opalescence and nuclear colour, 0.1 to 6.9 in steps of 0.1. Not the everyday "NS 1+ to 4+". */
export interface LocsNucleus { opalescence: number, colour: number }

/** What is known of an eye before its operation. Absent means not recorded, and is never read as normal. */
export interface RiskFactors {
  /** Whole years on the day of surgery, 0 to 120. */
  ageYears?: number
  sex?: Sex
  glaucoma?: boolean
  diabeticRetinopathy?: boolean
  cataract?: CataractKind
  locs?: LocsNucleus
  /** No view of the fundus, or vitreous opacities. */
  noFundalView?: boolean
  pseudoexfoliation?: boolean
  /** Phacodonesis, or zonules known to be weak or torn. */
  weakZonules?: boolean
  pupil?: PupilSize
  /** Axial length in mm, 14 to 40. */
  axialLengthMm?: number
  alphaBlocker?: AlphaBlocker
  canLieFlat?: boolean
  /** External anterior chamber depth in mm, 0.5 to 6. */
  anteriorChamberDepthMm?: number
  /** Endothelial cells per square millimetre, 0 to 6000. */
  endothelialCellsPerMm2?: number
  /** Who operates, when it is known. Absent: the figure is for a consultant, and says so. */
  surgeonGrade?: SurgeonGrade
}

export type SourceLabel = 'citation' | 'common practice' | 'from memory' | 'proposed'
export interface Source { text: string, label: SourceLabel }

export const riskFactorIds = [
  'age', 'sex', 'glaucoma', 'diabetic-retinopathy', 'brunescent-or-white', 'no-fundal-view',
  'pseudoexfoliation-or-phacodonesis', 'pupil', 'long-eye', 'alpha-blocker', 'cannot-lie-flat', 'surgeon',
] as const
export type RiskFactorId = typeof riskFactorIds[number]

/** One tread of the stair from the reference eye to this eye. */
export interface RiskShare {
  factor: RiskFactorId
  label: string
  oddsRatio: number
  /** `false`: not recorded, so counted at its worst. */
  known: boolean
  /** Part of the way from reference to this eye, on the scale of log odds; all shares add up to 1. Below 0 for a factor that protects. */
  share: number
  /** Probability after this tread, 0 to 1. */
  probabilityAfter: number
}

export const hazardIds = [
  'dense-nucleus', 'white-cataract', 'small-pupil', 'pseudoexfoliation', 'weak-zonules', 'alpha-blocker',
  'shallow-chamber', 'low-endothelial-count', 'cannot-lie-flat',
] as const
export type HazardId = typeof hazardIds[number]

export interface MissingFactor { factor: RiskFactorId | HazardId, label: string, countedAs: string }

export interface Hazard {
  id: HazardId
  label: string
  /** Work on top of a routine case, as a part of it: 0.25 is a quarter of a routine case more. */
  addedTime: number
  equipment: string[]
  preparation: string[]
  minimumGrade: MinimumGrade
  dayOneInPerson: boolean
  source: Source
}

export interface RiskAssessment {
  /** Chance of posterior capsule rupture or vitreous loss, 0 to 1, with everything unknown counted as present. */
  probability: number
  /** From everything unknown absent to everything unknown present; `null` when nothing of the model is unknown. */
  interval: { low: number, high: number } | null
  compositeOddsRatio: number
  /** Probability of the eye with no factor at all, after any calibration. */
  baselineProbability: number
  /** Steepest tread first. */
  shares: RiskShare[]
  missing: MissingFactor[]
  hazards: Hazard[]
  equipment: string[]
  preparation: string[]
  minimumGrade: MinimumGrade
  dayOneInPerson: boolean
  dayOneReasons: string[]
  difficulty: Difficulty
  /** Multiple of the surgeon's routine time, 1 or more, from what is known. */
  timeFactor: number
  /** Limits of the publication that acted on this eye, in words. */
  notes: string[]
  source: Source
}
