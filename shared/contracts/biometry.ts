import { z } from 'zod'

const number = z.number()
/** Wide on purpose: the plausibility rules say what is wrong with a value, and name the slip. */
const measured = { axialLengthMm: number, axialLengthSdMm: number.optional(), k1D: number, k1AxisDegrees: number, k2D: number, k2AxisDegrees: number, anteriorChamberDepthMm: number.optional(), lensThicknessMm: number.optional(), whiteToWhiteMm: number.optional() }
export const eyeMeasures = z.strictObject(measured)
export type EyeMeasures = z.output<typeof eyeMeasures>

export const recordBiometryBody = z.strictObject({
  eye: eyeMeasures,
  /** The other eye, measured in the same sitting: what the two are compared by. */
  fellow: eyeMeasures.optional(),
  cctUm: number.min(300, 'Between 300 and 1200 µm.').max(1200, 'Between 300 and 1200 µm.').optional(),
  endothelialCellsPerMm2: number.min(0).max(6000, 'Between 0 and 6000 cells per mm².').optional(),
  preoperativeAcuity: z.string().trim().max(30).optional(),
  preoperativeIopMmHg: number.min(0).max(80, 'Between 0 and 80 mmHg.').optional(),
  /** Typed, or proposed by a device's file and looked at. */
  source: z.enum(['typed', 'dicom']).default('typed'),
  /** The version that the caller saw; 0 for the first. */
  baseVersion: z.int().min(0),
})
export type RecordBiometryBody = z.output<typeof recordBiometryBody>

export const explainWarningBody = z.strictObject({ biometryId: z.uuid(), ruleId: z.string().min(1).max(80), words: z.string().trim().min(3, 'Explain it in a few words.').max(500) })
export const acceptBiometryBody = z.strictObject({ biometryId: z.uuid() })

const plan = {
  biometryId: z.uuid(),
  model: z.string().trim().min(2, 'Which lens model?').max(120),
  powerD: number,
  targetD: number,
  predictedD: number.min(-20, 'Between −20 and +20 D.').max(20, 'Between −20 and +20 D.'),
  /** Of this lens model, for SRK/T, as the printout gives it. */
  aConstant: number,
  cornealRefractiveSurgery: z.boolean().default(false),
}
export const checkLensBody = z.strictObject(plan)
export type CheckLensBody = z.output<typeof checkLensBody>
export const signLensPlanBody = z.strictObject({ ...plan, differenceExplained: z.string().trim().max(1000).default(''), baseVersion: z.int().min(0), amendReason: z.string().trim().max(500).default('') })
export type SignLensPlanBody = z.output<typeof signLensPlanBody>
