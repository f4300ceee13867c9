import type { biometries, lensPlans } from '#server/db/schema/index'
import type { LensCheck } from '#server/services/biometry/check-lens'
import type { SecondCheck } from '#shared/domain/biometry/lens-power/second-check'

export function presentBiometry(row: typeof biometries.$inferSelect) {
  return {
    id: row.id, version: row.version,
    measures: { axialLengthMm: row.axialLengthMm, axialLengthSdMm: row.axialLengthSdMm, k1D: row.k1D, k1AxisDegrees: row.k1AxisDegrees, k2D: row.k2D, k2AxisDegrees: row.k2AxisDegrees, anteriorChamberDepthMm: row.anteriorChamberDepthMm, lensThicknessMm: row.lensThicknessMm, whiteToWhiteMm: row.whiteToWhiteMm },
    cctUm: row.cctUm, endothelialCellsPerMm2: row.endothelialCellsPerMm2, preoperativeAcuity: row.preoperativeAcuityEntered, preoperativeIopMmHg: row.preoperativeIopMmHg,
    warnings: row.warnings.map(({ ruleId, sentence }) => ({ ruleId, sentence, explanation: row.explanations[ruleId]?.words ?? null })),
    measuredAt: row.measuredAt.toISOString(), acceptedAt: row.acceptedAt?.toISOString() ?? null,
  }
}
export type BiometryView = ReturnType<typeof presentBiometry>

export function presentLensPlan(row: typeof lensPlans.$inferSelect, signedByName: string) {
  return { id: row.id, version: row.version, biometryId: row.biometryId, model: row.model, powerD: row.powerD, targetD: row.targetD, predictedD: row.predictedD, verdict: row.secondCheckAgrees, differenceExplained: row.differenceExplained, signedByName, signedAt: row.signedAt.toISOString(), amendReason: row.amendReason }
}
export type LensPlanView = ReturnType<typeof presentLensPlan>

const presentCheck = (check: SecondCheck) => ({
  spreadD: check.spreadD,
  predictions: check.predictions.map(({ formula, label, predictedD, fromTargetD, withinLimit, constantConverted, howWorkedOut }) => ({ formula, label, predictedD, fromTargetD, withinLimit, constantConverted, howWorkedOut })),
  refused: check.refused.map(({ label, message }) => ({ label, message })),
  preferred: check.preferred,
  cautions: check.cautions,
})

export function presentLensCheck(judged: LensCheck) {
  return { verdict: judged.verdict, limitD: judged.limitD, reasons: judged.reasons, check: judged.check ? presentCheck(judged.check) : null }
}
export type LensCheckView = ReturnType<typeof presentLensCheck>
