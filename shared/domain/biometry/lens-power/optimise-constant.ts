import { mean, median, sampleStandardDeviation } from 'simple-statistics'
import { DomainError } from '#shared/domain/errors'
import { completeConstants } from '#shared/domain/biometry/lens-power/constants'
import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import { formulaEye, requireUsable } from '#shared/domain/biometry/lens-power/formulas'
import { refractionForPower, refractionLimits, refuse } from '#shared/domain/biometry/lens-power/optics'
import { requireStorable } from '#shared/domain/biometry/limits'
import { formulaIds } from '#shared/domain/biometry/vocabulary'
import type { EyeBiometry, FormulaId, LensConstants } from '#shared/domain/biometry/vocabulary'

/** One operated eye: what was measured before, what was implanted, what came out. */
export interface LensResult {
  biometry: EyeBiometry
  powerD: number
  /** Spherical equivalent reached, in dioptres. */
  achievedD: number
}

export interface ErrorSummary {
  meanErrorD: number
  meanAbsoluteErrorD: number
  medianAbsoluteErrorD: number
  /** Sample standard deviation (n - 1). */
  standardDeviationD: number
}

export interface OptimisedConstant {
  formula: FormulaId
  constant: 'aConstant' | 'surgeonFactorMm' | 'personalAcdMm' | 'haigis.a0Mm'
  start: number
  optimised: number
  eyes: number
  before: ErrorSummary
  /** With the constant worked out again for each eye. Not the same as taking the mean error off each eye. */
  after: ErrorSummary
  cautions: string[]
  source: string
}

const source = 'Zero mean prediction error by changing the constant: Hoffer KJ et al. Am J Ophthalmol 2015;160:403-405; Wang L et al. J Cataract Refract Surg 2017;43:999-1002'
const fewestEyes = 5
/** Below this a single constant still moves with each added eye ('common practice'). */
const enoughEyes = 50

const constantOf: Record<FormulaId, { name: OptimisedConstant['constant'], widest: number, read: (from: CompleteConstants) => number, write: (from: CompleteConstants, value: number) => CompleteConstants }> = {
  'srk-t': { name: 'aConstant', widest: 4, read: from => from.aConstant, write: (from, value) => ({ ...from, aConstant: value }) },
  'holladay-1': { name: 'surgeonFactorMm', widest: 2.5, read: from => from.surgeonFactorMm, write: (from, value) => ({ ...from, surgeonFactorMm: value }) },
  'hoffer-q': { name: 'personalAcdMm', widest: 2.5, read: from => from.personalAcdMm, write: (from, value) => ({ ...from, personalAcdMm: value }) },
  'haigis': { name: 'haigis.a0Mm', widest: 2.5, read: from => from.haigis.a0Mm, write: (from, value) => ({ ...from, haigis: { ...from.haigis, a0Mm: value } }) },
}

/** Achieved less predicted for each eye; positive is more long-sighted than predicted. */
function errorsOf(formula: FormulaId, results: readonly LensResult[], constants: CompleteConstants): number[] {
  return results.map(each => each.achievedD - refractionForPower(formulaEye(formula, each.biometry, constants).optics, each.powerD))
}

function summaryOf(errors: number[]): ErrorSummary {
  const absolute = errors.map(Math.abs)
  return { meanErrorD: mean(errors), meanAbsoluteErrorD: mean(absolute), medianAbsoluteErrorD: median(absolute), standardDeviationD: sampleStandardDeviation(errors) }
}

function requireResults(results: readonly LensResult[]): void {
  if (!Array.isArray(results) || results.length < fewestEyes) throw new DomainError('biometry.too-few-results', `At least ${fewestEyes} operated eyes are needed to optimise a constant.`, { fields: [{ field: 'results', code: 'too-few', message: `Give at least ${fewestEyes} eyes.`, limit: `${fewestEyes} or more` }] })
  results.forEach((each, index) => {
    try {
      requireStorable(each?.biometry)
      requireUsable(each.biometry)
    }
    catch (error) {
      if (error instanceof DomainError) throw new DomainError(error.code, `Eye ${index + 1}: ${error.message}`, { fields: error.fields.map(problem => ({ ...problem, field: `results.${index}.biometry.${problem.field}` })) })
      throw error
    }
    if (!(each.achievedD >= refractionLimits.min && each.achievedD <= refractionLimits.max)) refuse('biometry.refraction-out-of-range', `Eye ${index + 1}: enter the refraction reached, in dioptres.`, `results.${index}.achievedD`, `${refractionLimits.min} to ${refractionLimits.max} D`)
  })
}

/**
 * The constant at which a formula's mean prediction error over these eyes is zero: A for SRK/T, SF for Holladay 1,
 * pACD for Hoffer Q, a0 for Haigis (a1 and a2 are kept). The mean error falls steadily as the constant rises, so the
 * root is unique; it is bracketed and halved to 1e-9.
 * One eye per patient, and eyes of one lens model, are the caller's duty.
 * @throws DomainError `biometry.too-few-results` below five eyes, `biometry.constant-not-found` when the root lies more
 * than 4 (A) or 2.5 mm from the start, which means mixed-up data and not a constant; else as the formulas do.
 */
export function optimiseConstant(formula: FormulaId, results: readonly LensResult[], constants: LensConstants): OptimisedConstant {
  if (!formulaIds.includes(formula)) refuse('biometry.formula-unknown', 'This formula is not one of the four.', 'formula', formulaIds.join(', '))
  requireResults(results)
  const start = completeConstants(constants)
  const { name, widest, read, write } = constantOf[formula]
  const meanErrorAt = (value: number) => mean(errorsOf(formula, results, write(start, value)))
  const before = errorsOf(formula, results, start)
  const direction = Math.sign(mean(before))
  let near = read(start)
  let far = near
  for (let step = 0.1; direction !== 0 && Math.sign(meanErrorAt(far)) === direction; step *= 1.5) {
    near = far
    far += direction * step
    if (Math.abs(far - read(start)) > widest) throw new DomainError('biometry.constant-not-found', 'No constant near this one brings the mean error to zero. Check that these eyes all have this lens model and that power and refraction are not mixed up.', { fields: [{ field: 'results', code: 'constant-not-found', message: 'The results do not fit this lens model.', limit: `within ${widest} of the start` }] })
  }
  while (Math.abs(far - near) > 1e-9) {
    const middle = (near + far) / 2
    if (Math.sign(meanErrorAt(middle)) === direction) near = middle
    else far = middle
  }
  const optimised = (near + far) / 2
  return {
    formula,
    constant: name,
    start: read(start),
    optimised,
    eyes: results.length,
    before: summaryOf(before),
    after: summaryOf(errorsOf(formula, results, write(start, optimised))),
    cautions: results.length < enoughEyes ? [`Only ${results.length} eyes: below ${enoughEyes} the constant still moves with every eye that is added.`] : [],
    source,
  }
}
