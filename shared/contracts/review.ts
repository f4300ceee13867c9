import { z } from 'zod'
import {
  cellGrades, chamberDepths, dropsUses, flareGrades, foldGrades, hyphaemaGrades, lensFragments, lensPositions, pressureMethods, pupilStates, redReflexes, seidelResults, woundStates,
} from '#shared/domain/review/vocabulary'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'

const acuity = z.strictObject({ logMar: z.number().min(-0.4).max(3), entered: z.string().trim().min(1).max(40) })
const yesNo = z.boolean()
const grade = z.union([z.literal(0), z.literal(1), z.literal(2), z.literal(3), z.literal(4)])

/** The same schema for the form, the draft and the signing. Everything may be absent; absent is not normal. */
export const findingsSchema = z.strictObject({
  painScore: z.int('Pain is a whole number from 0 to 10.').min(0).max(10, 'Pain is 0 to 10.'),
  painGrowing: yesNo,
  vomiting: yesNo,
  acuityUnaided: acuity,
  acuityPinhole: acuity,
  acuityReason: z.string().trim().max(300),
  iopMmHg: z.number().min(0, 'Pressure is 0 to 80 mmHg.').max(80, 'Pressure is 0 to 80 mmHg.'),
  iopMethod: z.enum(pressureMethods),
  iopTakenAt: z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Use a time such as 08:57.'),
  oedemaGrade: grade,
  oedemaLimbusToLimbus: yesNo,
  folds: z.enum(foldGrades),
  cctUm: z.number().min(300, 'Corneal thickness is 300 to 1200 micrometres.').max(1200, 'Corneal thickness is 300 to 1200 micrometres.'),
  infiltrate: yesNo,
  epithelialDefectMm: z.number().min(0).max(12),
  wound: z.enum(woundStates),
  seidel: z.enum(seidelResults),
  woundClockHour: z.int().min(1).max(12),
  irisInWound: yesNo,
  chamberDepth: z.enum(chamberDepths),
  cells: z.enum(cellGrades),
  flare: z.enum(flareGrades),
  fibrin: yesNo,
  hypopyonMm: z.number().min(0).max(12),
  hyphaema: z.enum(hyphaemaGrades),
  vitreousInChamber: yesNo,
  vitreousCells: yesNo,
  pupil: z.enum(pupilStates),
  lensPosition: z.enum(lensPositions),
  lensTouchesCornea: yesNo,
  lensFragment: z.enum(lensFragments),
  redReflex: z.enum(redReflexes),
  lidSwelling: yesNo,
  flashesOrFloaters: yesNo,
  curtainOrFieldLoss: yesNo,
  dropsUse: z.enum(dropsUses),
  dropsAllergy: yesNo,
  refractionSphereD: z.number().min(-30).max(30),
  refractionCylinderD: z.number().min(-15).max(15),
  refractionAxisDegrees: z.number().min(0).max(180),
  note: z.string().trim().max(2000),
}).partial() satisfies z.ZodType<ReviewFindings>

export const visitParams = z.object({ visitId: z.uuid('Not an id.') })
export const saveDraftBody = z.strictObject({ findings: findingsSchema, rowVersion: z.int().positive().nullable() })
export const signReviewBody = z.strictObject({
  findings: findingsSchema,
  /** Fields whose doubtful value the examiner has looked at again. */
  confirmedDoubts: z.array(z.string().max(60)).max(20).default([]),
})
export const amendReviewBody = z.strictObject({ findings: findingsSchema, reason: z.string().trim().min(5, 'Say why it is amended.').max(500), baseVersion: z.int().positive(), confirmedDoubts: z.array(z.string().max(60)).max(20).default([]) })
export type SaveDraftBody = z.infer<typeof saveDraftBody>
export type SignReviewBody = z.infer<typeof signReviewBody>
export type AmendReviewBody = z.infer<typeof amendReviewBody>
