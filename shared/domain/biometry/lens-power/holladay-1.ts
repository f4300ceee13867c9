import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import type { Formula, FormulaEye } from '#shared/domain/biometry/lens-power/optics'
import { meanCornealPowerD } from '#shared/domain/biometry/limits'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'

export const holladay1Formula: Formula = {
  id: 'holladay-1',
  publication: 'Holladay JT, Prager TC, Chandler TY, et al. J Cataract Refract Surg 1988;14:17-24',
  sourceLabel: 'from memory',
  needs: ['axialLengthMm', 'k1D', 'k2D'],
}

const smallestRadiusMm = 7
const largestDiameterMm = 13.5

/**
 * Holladay 1.
 *
 * Two limits belong to the publication and act on the predicted chamber depth only, never on the optics: the radius
 * counts as 7 mm when it is smaller (K above 48.21 D), and the anterior segment's diameter as 13.5 mm when it would be
 * larger (longer than 25.33 mm). Each is said in `notes` when it acts. They keep the root real: 7 > 13.5 / 2.
 */
export function holladay1(eye: EyeBiometry, constants: CompleteConstants): FormulaEye {
  const axialLengthMm = eye.axialLengthMm
  const kD = meanCornealPowerD(eye)
  const radiusMm = 337.5 / kD
  const notes: string[] = []
  let segmentRadiusMm = radiusMm
  if (radiusMm < smallestRadiusMm) {
    segmentRadiusMm = smallestRadiusMm
    notes.push('The cornea is steeper than 7 mm: the formula takes 7 mm for the chamber depth.')
  }
  let diameterMm = 12.5 * axialLengthMm / 23.45
  if (diameterMm > largestDiameterMm) {
    diameterMm = largestDiameterMm
    notes.push('The eye is longer than 25.33 mm: the formula holds the anterior segment at 13.5 mm.')
  }
  const depthMm = 0.56 + segmentRadiusMm - Math.sqrt(segmentRadiusMm ** 2 - diameterMm ** 2 / 4)
  return {
    formula: holladay1Formula,
    optics: {
      cornealPowerD: 1000 / 3 / radiusMm,
      opticalLengthMm: axialLengthMm + 0.2,
      lensPositionMm: depthMm + constants.surgeonFactorMm,
    },
    inputs: [
      { name: 'Axial length', value: axialLengthMm, unit: 'mm' },
      { name: 'Mean K', value: kD, unit: 'D' },
      { name: 'Surgeon factor', value: constants.surgeonFactorMm, unit: 'mm' },
    ],
    steps: [
      { name: 'Corneal radius', value: radiusMm, unit: 'mm' },
      { name: 'Anterior segment diameter', value: diameterMm, unit: 'mm' },
      { name: 'Anatomic chamber depth', value: depthMm, unit: 'mm' },
    ],
    notes,
  }
}
