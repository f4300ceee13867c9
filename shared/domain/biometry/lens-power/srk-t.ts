import { acdConstantFromA } from '#shared/domain/biometry/lens-power/constants'
import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import { refuse } from '#shared/domain/biometry/lens-power/optics'
import type { Formula, FormulaEye } from '#shared/domain/biometry/lens-power/optics'
import { meanCornealPowerD } from '#shared/domain/biometry/limits'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'

export const srkTFormula: Formula = {
  id: 'srk-t',
  publication: 'Retzlaff JA, Sanders DR, Kraff MC. J Cataract Refract Surg 1990;16:333-340, erratum 1990;16:528',
  sourceLabel: 'from memory',
  needs: ['axialLengthMm', 'k1D', 'k2D'],
}

/** Beyond this length the formula corrects the length before it predicts the lens position. */
const longFromMm = 24.2

/**
 * SRK/T.
 *
 * Coefficients after the erratum: -3.446 + 1.716 L - 0.0237 L². The variant with 1.715 that is also in circulation
 * jumps by 0.023 mm at 24.2 mm and misses the failure point that Aramberri published (K 45 D fails beyond 33.12 mm;
 * J Cataract Refract Surg 2005;31:255-256), so it is not used. The corneal width starts at -5.41 (others print
 * -5.40948; below 0.001 D).
 *
 * Guard: for steep corneas in long eyes the corneal height has no real root (Haigis, J Cataract Refract Surg
 * 1993;19:442-443). Setting the root to 0 and taking the absolute value differ by more than 1 D, so this refuses.
 * @throws DomainError `biometry.srk-t-no-corneal-height`
 */
export function srkT(eye: EyeBiometry, constants: CompleteConstants): FormulaEye {
  const axialLengthMm = eye.axialLengthMm
  const kD = meanCornealPowerD(eye)
  const radiusMm = 337.5 / kD
  const correctedMm = axialLengthMm <= longFromMm ? axialLengthMm : -3.446 + 1.716 * axialLengthMm - 0.0237 * axialLengthMm ** 2
  const widthMm = -5.41 + 0.58412 * correctedMm + 0.098 * kD
  const underRoot = radiusMm ** 2 - widthMm ** 2 / 4
  if (underRoot < 0) refuse('biometry.srk-t-no-corneal-height', `SRK/T has no answer for a cornea of ${kD.toFixed(2)} D in an eye of ${axialLengthMm.toFixed(2)} mm: its corneal height does not exist there.`, 'k1D', 'corneal radius at least half the computed corneal width', { formula: 'srk-t' })
  const heightMm = radiusMm - Math.sqrt(underRoot)
  const acdConstantMm = acdConstantFromA(constants.aConstant)
  return {
    formula: srkTFormula,
    optics: {
      cornealPowerD: 333 / radiusMm,
      opticalLengthMm: axialLengthMm + 0.65696 - 0.02029 * axialLengthMm,
      lensPositionMm: heightMm + acdConstantMm - 3.336,
    },
    inputs: [
      { name: 'Axial length', value: axialLengthMm, unit: 'mm' },
      { name: 'Mean K', value: kD, unit: 'D' },
      { name: 'A constant', value: constants.aConstant, unit: '' },
    ],
    steps: [
      { name: 'Corneal radius', value: radiusMm, unit: 'mm' },
      { name: 'Corrected axial length', value: correctedMm, unit: 'mm' },
      { name: 'Corneal width', value: widthMm, unit: 'mm' },
      { name: 'Corneal height', value: heightMm, unit: 'mm' },
      { name: 'ACD constant', value: acdConstantMm, unit: 'mm' },
    ],
    notes: axialLengthMm > longFromMm ? ['Longer than 24.2 mm: the length is corrected before the lens position is predicted.'] : [],
  }
}
