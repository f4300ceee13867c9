/**
 * The findings of a review. Everything is optional: an absent value means "not recorded" and is
 * never read as normal. Values carry their unit in the name.
 */
export const cellGrades = ['0', '0.5+', '1+', '2+', '3+', '4+'] as const
export type CellGrade = typeof cellGrades[number]

export const flareGrades = ['0', '1+', '2+', '3+', '4+'] as const
export type FlareGrade = typeof flareGrades[number]

export const oedemaGrades = [0, 1, 2, 3, 4] as const
export type OedemaGrade = typeof oedemaGrades[number]

export const hyphaemaGrades = ['none', 'micro', 'I', 'II', 'III', 'IV'] as const
export type HyphaemaGrade = typeof hyphaemaGrades[number]

export const pressureMethods = ['applanation', 'rebound', 'non-contact'] as const
export type PressureMethod = typeof pressureMethods[number]

export const seidelResults = ['not-done', 'negative', 'provoked', 'spontaneous'] as const
export type SeidelResult = typeof seidelResults[number]

export const woundStates = ['sealed', 'gaping', 'leaking'] as const
export type WoundState = typeof woundStates[number]

export const foldGrades = ['none', 'few', 'many'] as const
export type FoldGrade = typeof foldGrades[number]

export const chamberDepths = ['deep', 'shallow', 'flat'] as const
export type ChamberDepth = typeof chamberDepths[number]

export const pupilStates = ['round', 'peaked', 'irregular', 'fixed-dilated'] as const
export type PupilState = typeof pupilStates[number]

export const lensPositions = ['centred', 'decentred', 'tilted', 'out-of-bag'] as const
export type LensPosition = typeof lensPositions[number]

export const lensFragments = ['none', 'anterior', 'posterior'] as const
export type LensFragment = typeof lensFragments[number]

export const redReflexes = ['normal', 'dull', 'absent'] as const
export type RedReflex = typeof redReflexes[number]

export const dropsUses = ['using', 'partly', 'not-using', 'cannot-use', 'finished'] as const
export type DropsUse = typeof dropsUses[number]

export const visitKinds = ['day-one', 'first-week', 'final', 'unplanned'] as const
export type VisitKind = typeof visitKinds[number]

/** Acuity is stored as logMAR beside exactly what was typed. */
export interface RecordedAcuity {
  /** logMAR, -0.3 to 3.0; larger is worse. Low vision uses published equivalents (see review/acuity). */
  logMar: number
  /** What the clinician typed, kept for the record: `6/9-2`, `CF`, `0.2 logMAR`. */
  entered: string
}

export interface ReviewFindings {
  /** 0 (none) to 10 (worst). */
  painScore?: number
  painGrowing?: boolean
  vomiting?: boolean
  acuityUnaided?: RecordedAcuity
  acuityPinhole?: RecordedAcuity
  /** Why sight is worse than expected, when the examiner knows. */
  acuityReason?: string
  /** Intraocular pressure in mmHg, 0 to 80. Blank is not 0. */
  iopMmHg?: number
  iopMethod?: PressureMethod
  /** Wall-clock time of the measurement at the site, HH:mm. */
  iopTakenAt?: string
  oedemaGrade?: OedemaGrade
  oedemaLimbusToLimbus?: boolean
  folds?: FoldGrade
  /** Central corneal thickness in micrometres, 300 to 1200. */
  cctUm?: number
  infiltrate?: boolean
  /** Largest diameter of an epithelial defect in mm, 0 for none, to 12. */
  epithelialDefectMm?: number
  wound?: WoundState
  seidel?: SeidelResult
  /** Clock hour of the wound, 1 to 12, as one faces the patient. */
  woundClockHour?: number
  irisInWound?: boolean
  chamberDepth?: ChamberDepth
  cells?: CellGrade
  flare?: FlareGrade
  fibrin?: boolean
  /** Height in mm from the limbus at 6 o'clock, 0 for none, to 12. */
  hypopyonMm?: number
  hyphaema?: HyphaemaGrade
  vitreousInChamber?: boolean
  vitreousCells?: boolean
  pupil?: PupilState
  lensPosition?: LensPosition
  lensTouchesCornea?: boolean
  lensFragment?: LensFragment
  redReflex?: RedReflex
  lidSwelling?: boolean
  flashesOrFloaters?: boolean
  curtainOrFieldLoss?: boolean
  dropsUse?: DropsUse
  dropsAllergy?: boolean
  /** Refraction in dioptres, when measured at this visit. */
  refractionSphereD?: number
  refractionCylinderD?: number
  refractionAxisDegrees?: number
  note?: string
}

export const riskReasons = ['glaucoma', 'ocular-hypertension', 'disc-damage', 'only-eye', 'vein-occlusion', 'optic-neuropathy', 'steroid-response'] as const
/** Why an eye's pressure limits are lower (rules table 2, eyes at risk). */
export type RiskReason = typeof riskReasons[number]

/** What the rules must know about the eye beside the findings. `null` or absent means unknown, never normal. */
export interface ReviewContext {
  visitKind: VisitKind
  /** Whole days since surgery at the site's calendar; surgery day is 0. */
  daysAfterSurgery: number
  riskReasons: RiskReason[]
  preoperative: { bestLogMar?: number, iopMmHg?: number, redReflex?: RedReflex }
  /** The last signed post-operative review of this eye, if any. */
  previous?: { bestLogMar?: number, iopMmHg?: number, redReflex?: RedReflex, painScore?: number }
  onSteroidDrops?: boolean
  /** Whole days since steroid drops were stopped, when they were. */
  daysSinceDropsStopped?: number
  lensAsPlanned?: boolean
  /** The written explanation when the implanted lens differs from the plan. */
  lensDeviationExplained?: boolean
  predictedRefractionD?: number
  /** Other eyes of the same theatre list, or of the site within 7 days, already suspected of infection or toxic reaction. */
  otherSuspectedOnList?: number
  otherSuspectedAtSiteThisWeek?: number
}
