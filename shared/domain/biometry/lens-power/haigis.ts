import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import { refuse } from '#shared/domain/biometry/lens-power/optics'
import type { Formula, FormulaEye } from '#shared/domain/biometry/lens-power/optics'
import { fieldLimits, indexOf, limitWords } from '#shared/domain/biometry/limits'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'

export const haigisFormula: Formula = {
  id: 'haigis',
  publication: 'Haigis W, Lege B, Miller N, Schneider B. Graefes Arch Clin Exp Ophthalmol 2000;238:765-773',
  sourceLabel: 'from memory',
  needs: ['axialLengthMm', 'k1D', 'k2D', 'anteriorChamberDepthMm'],
}

/**
 * Haigis. The only one of the four that uses the measured chamber depth (front of the cornea to the front of the
 * lens) and the only one without a branch. It averages the radii, not the powers: half the sum of 337.5 / K.
 * @throws DomainError `biometry.chamber-depth-missing`
 */
export function haigis(eye: EyeBiometry, constants: CompleteConstants): FormulaEye {
  const { axialLengthMm, anteriorChamberDepthMm } = eye
  if (anteriorChamberDepthMm === undefined || anteriorChamberDepthMm === null) refuse('biometry.chamber-depth-missing', `Haigis needs the ${fieldLimits.anteriorChamberDepthMm.label.toLowerCase()}, which was not measured.`, 'anteriorChamberDepthMm', limitWords('anteriorChamberDepthMm'), { formula: 'haigis' })
  const perDioptre = (indexOf(eye) - 1) * 1000
  const radiusMm = (perDioptre / eye.k1D + perDioptre / eye.k2D) / 2
  const { a0Mm, a1, a2 } = constants.haigis
  return {
    formula: haigisFormula,
    optics: {
      cornealPowerD: 331.5 / radiusMm,
      opticalLengthMm: axialLengthMm,
      lensPositionMm: a0Mm + a1 * anteriorChamberDepthMm + a2 * axialLengthMm,
    },
    inputs: [
      { name: 'Axial length', value: axialLengthMm, unit: 'mm' },
      { name: 'Chamber depth', value: anteriorChamberDepthMm, unit: 'mm' },
      { name: 'a0', value: a0Mm, unit: 'mm' },
      { name: 'a1', value: a1, unit: '' },
      { name: 'a2', value: a2, unit: '' },
    ],
    steps: [{ name: 'Mean corneal radius', value: radiusMm, unit: 'mm' }],
    notes: [],
  }
}
