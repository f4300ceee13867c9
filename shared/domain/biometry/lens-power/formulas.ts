import { completeConstants } from '#shared/domain/biometry/lens-power/constants'
import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import { haigis } from '#shared/domain/biometry/lens-power/haigis'
import { hofferQ } from '#shared/domain/biometry/lens-power/hoffer-q'
import { holladay1 } from '#shared/domain/biometry/lens-power/holladay-1'
import { howWorkedOut, powerForRefraction, refractionForPower, refuse, requireLensPosition } from '#shared/domain/biometry/lens-power/optics'
import type { FormulaEye } from '#shared/domain/biometry/lens-power/optics'
import { srkT } from '#shared/domain/biometry/lens-power/srk-t'
import { meanCornealPowerD, requireStorable } from '#shared/domain/biometry/limits'
import { formulaIds } from '#shared/domain/biometry/vocabulary'
import type { EyeBiometry, FormulaId, HowWorkedOut, LensConstants } from '#shared/domain/biometry/vocabulary'

const eyeFor: Record<FormulaId, (eye: EyeBiometry, constants: CompleteConstants) => FormulaEye> = {
  'srk-t': srkT, 'holladay-1': holladay1, 'hoffer-q': hofferQ, 'haigis': haigis,
}

/**
 * Eyes for which any of the four formulas may be asked. Proposed: below 18 mm and outside 34 to 54 D the published
 * series hold next to no eyes; beyond 36 mm the length correction of SRK/T turns back (its peak is 36.2 mm, algebra).
 */
export const usableEyes = { axialLengthMm: { min: 18, max: 36 }, meanKD: { min: 34, max: 54 } }

/** @throws DomainError `biometry.eye-out-of-formula-range` */
export function requireUsable(eye: EyeBiometry): void {
  const { axialLengthMm, meanKD } = usableEyes
  if (eye.axialLengthMm < axialLengthMm.min || eye.axialLengthMm > axialLengthMm.max) refuse('biometry.eye-out-of-formula-range', `An eye of ${eye.axialLengthMm.toFixed(2)} mm is outside what the formulas were made from. None of them is used.`, 'axialLengthMm', '18 to 36 mm')
  const kD = meanCornealPowerD(eye)
  if (kD < meanKD.min || kD > meanKD.max) refuse('biometry.eye-out-of-formula-range', `A mean corneal power of ${kD.toFixed(2)} D is outside what the formulas were made from. None of them is used.`, 'k1D', '34 to 54 D')
}

/** The eye as one formula sees it; the measurements and constants must have been checked. */
export function formulaEye(id: FormulaId, eye: EyeBiometry, constants: CompleteConstants): FormulaEye {
  const seen = eyeFor[id](eye, constants)
  requireLensPosition(seen.formula, seen.optics.lensPositionMm)
  return seen
}

export interface LensPowerAnswer {
  formula: FormulaId
  /** Lens power in dioptres at the lens plane. */
  powerD: number
  /** Refraction in dioptres, spherical equivalent at the spectacle plane. */
  refractionD: number
  howWorkedOut: HowWorkedOut
}

function prepared(formula: FormulaId, eye: EyeBiometry, constants: LensConstants): FormulaEye {
  if (!formulaIds.includes(formula)) refuse('biometry.formula-unknown', 'This formula is not one of the four.', 'formula', formulaIds.join(', '))
  requireStorable(eye)
  requireUsable(eye)
  return formulaEye(formula, eye, completeConstants(constants))
}

/**
 * Power of the lens that gives a refraction. For checks and statistics; no page proposes a power.
 * @throws DomainError for measurements, constants or a target that cannot be used; never NaN or an infinity.
 */
export function powerForTarget(formula: FormulaId, eye: EyeBiometry, constants: LensConstants, targetD: number): LensPowerAnswer {
  const seen = prepared(formula, eye, constants)
  return { formula, powerD: powerForRefraction(seen.optics, targetD), refractionD: targetD, howWorkedOut: howWorkedOut(seen) }
}

/**
 * Refraction that a lens power is predicted to give; the inverse of `powerForTarget`.
 * @throws DomainError for measurements, constants or a power that cannot be used; never NaN or an infinity.
 */
export function predictedRefraction(formula: FormulaId, eye: EyeBiometry, constants: LensConstants, powerD: number): LensPowerAnswer {
  const seen = prepared(formula, eye, constants)
  return { formula, powerD, refractionD: refractionForPower(seen.optics, powerD), howWorkedOut: howWorkedOut(seen) }
}

/**
 * The refraction error of an operated eye as lens power: what was implanted less the power that the formula gives for
 * the refraction achieved. Negative with a myopic surprise: the eye behaves as if its lens were that much stronger, and
 * a lens weaker by as much would have given the prediction. About 1.5 D of lens for 1 D of refraction (algebra).
 */
export function lensPowerError(formula: FormulaId, eye: EyeBiometry, constants: LensConstants, implanted: { powerD: number, achievedD: number }): { predictionErrorD: number, powerErrorD: number } {
  const seen = prepared(formula, eye, constants)
  return {
    predictionErrorD: implanted.achievedD - refractionForPower(seen.optics, implanted.powerD),
    powerErrorD: implanted.powerD - powerForRefraction(seen.optics, implanted.achievedD),
  }
}
