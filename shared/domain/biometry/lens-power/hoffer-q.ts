import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import { refuse } from '#shared/domain/biometry/lens-power/optics'
import type { Formula, FormulaEye } from '#shared/domain/biometry/lens-power/optics'
import { meanCornealPowerD } from '#shared/domain/biometry/limits'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'

export const hofferQFormula: Formula = {
  id: 'hoffer-q',
  publication: 'Hoffer KJ. J Cataract Refract Surg 1993;19:700-712, errata 1994;20:677 and 2007;33:2-3',
  sourceLabel: 'from memory',
  needs: ['axialLengthMm', 'k1D', 'k2D'],
}

export const hofferQLengthMm = { min: 18.5, max: 31 }

/** Tangent of degrees: the publication's angles are degrees (Hoffer, Eye 2007;21:429, on programming it in radians). */
const tanDegrees = (degrees: number) => Math.tan(degrees * Math.PI / 180)

/**
 * Hoffer Q, with the corrected signs of the errata: M is +1 and G 28 up to 23.0 mm, else -1 and 23.5.
 *
 * The publication holds the axial length at 18.5 and 31 mm in the lens position. Past them this refuses instead, since
 * a held length is an answer for another eye. Some texts also hold the lens position between 2.5 and 6.5 mm; that
 * variant is not used here (it would change eyes longer than about 26.6 mm), and `notes` says when it would act.
 * @throws DomainError `biometry.hoffer-q-length-out-of-range`
 */
export function hofferQ(eye: EyeBiometry, constants: CompleteConstants): FormulaEye {
  const axialLengthMm = eye.axialLengthMm
  if (axialLengthMm < hofferQLengthMm.min || axialLengthMm > hofferQLengthMm.max) refuse('biometry.hoffer-q-length-out-of-range', `Hoffer Q is published for eyes of 18.5 to 31 mm. This eye is ${axialLengthMm.toFixed(2)} mm long.`, 'axialLengthMm', '18.5 to 31 mm', { formula: 'hoffer-q' })
  const kD = meanCornealPowerD(eye)
  const [m, g] = axialLengthMm <= 23 ? [1, 28] : [-1, 23.5]
  const fromNormalMm = axialLengthMm - 23.5
  const cornealTermMm = tanDegrees(kD) ** 2
  const endTermMm = 0.1 * m * fromNormalMm ** 2 * tanDegrees(0.1 * (g - axialLengthMm) ** 2)
  const depthMm = constants.personalAcdMm + 0.3 * fromNormalMm + cornealTermMm + endTermMm - 0.99166
  return {
    formula: hofferQFormula,
    optics: { cornealPowerD: kD, opticalLengthMm: axialLengthMm, lensPositionMm: depthMm + 0.05 },
    inputs: [
      { name: 'Axial length', value: axialLengthMm, unit: 'mm' },
      { name: 'Mean K', value: kD, unit: 'D' },
      { name: 'Personal chamber depth', value: constants.personalAcdMm, unit: 'mm' },
    ],
    steps: [
      { name: 'Length term', value: 0.3 * fromNormalMm, unit: 'mm' },
      { name: 'Corneal term', value: cornealTermMm, unit: 'mm' },
      { name: 'Term for short and long eyes', value: endTermMm, unit: 'mm' },
      { name: 'Predicted chamber depth', value: depthMm, unit: 'mm' },
    ],
    notes: depthMm > 6.5 || depthMm < 2.5 ? ['The predicted depth is outside 2.5 to 6.5 mm, where some texts hold it. It is used here as computed.'] : [],
  }
}
