import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import { completeConstants } from '#shared/domain/biometry/lens-power/constants'
import type { CompleteConstants } from '#shared/domain/biometry/lens-power/constants'
import { formulaEye, requireUsable } from '#shared/domain/biometry/lens-power/formulas'
import { howWorkedOut, powerLimits, refractionForPower, refuse } from '#shared/domain/biometry/lens-power/optics'
import { preferencesFor } from '#shared/domain/biometry/lens-power/preference'
import type { Preference } from '#shared/domain/biometry/lens-power/preference'
import { requireStorable } from '#shared/domain/biometry/limits'
import { formulaIds, formulaLabels } from '#shared/domain/biometry/vocabulary'
import type { EyeBiometry, FormulaId, HowWorkedOut, LensConstants } from '#shared/domain/biometry/vocabulary'
import type { Eye } from '#shared/domain/pathway/vocabulary'

/** Raised whenever an answer of the second check could change for the same eye. */
export const secondCheckVersion = 1

export interface SecondCheckInput {
  biometry: EyeBiometry
  constants: LensConstants
  /** The power chosen by the surgeon, in dioptres. */
  powerD: number
  /** The refraction aimed at, in dioptres, spherical equivalent at the spectacle plane. */
  targetD: number
  /** Largest difference from the target that needs no explanation, in dioptres, 0.1 to 2. */
  limitD: number
  /** True when the cornea was reshaped by laser or incisions: none of the four formulas may then be used. */
  cornealRefractiveSurgery?: boolean
}

export interface FormulaPrediction {
  formula: FormulaId
  label: string
  /** Predicted refraction in dioptres with the chosen power. */
  predictedD: number
  /** Predicted less target; positive is more long-sighted than aimed at. */
  fromTargetD: number
  withinLimit: boolean
  lensPositionMm: number
  /** The constant was converted from the A constant, not optimised for this formula. */
  constantConverted: boolean
  howWorkedOut: HowWorkedOut
}

export interface FormulaRefusal { formula: FormulaId, label: string, code: string, message: string, fields: FieldProblem[] }

export interface SecondCheck {
  version: number
  eye: Eye
  powerD: number
  targetD: number
  limitD: number
  predictions: FormulaPrediction[]
  /** Formulas that may not be used for this eye, each with its reason. */
  refused: FormulaRefusal[]
  /** Largest less smallest prediction in dioptres, 0 for a single one. */
  spreadD: number
  /** `agrees`: every formula that answered is within the limit. Look at `refused` for how many those are. */
  agreement: 'agrees' | 'differs'
  outsideLimit: FormulaId[]
  preferred: Preference[]
  /** A, SF, pACD and a0, a1, a2 as used, and which were converted. */
  constants: CompleteConstants
  /** What a reader should know before relying on these figures. */
  cautions: string[]
}

const targetLimits = { min: -10, max: 5 }
const limitLimits = { min: 0.1, max: 2 }

/** A difference of exactly the limit is inside it, whatever binary fractions make of it. */
const tolerance = 1e-9

function requirePlan({ powerD, targetD, limitD, biometry }: SecondCheckInput): void {
  const fields: FieldProblem[] = []
  const span = (field: string, value: unknown, limits: { min: number, max: number }, label: string) => {
    const limit = `${limits.min} to ${limits.max} D`
    if (typeof value !== 'number' || !Number.isFinite(value)) fields.push({ field, code: 'not-a-number', message: `${label} is missing or is not a number.`, limit })
    else if (value < limits.min || value > limits.max) fields.push({ field, code: 'out-of-range', message: `${label} ${value} D is outside ${limit}.`, limit })
  }
  span('powerD', powerD, powerLimits, 'Lens power')
  span('targetD', targetD, targetLimits, 'Target refraction')
  span('limitD', limitD, limitLimits, 'The limit')
  if (fields.length) throw new DomainError('biometry.plan-out-of-range', fields[0]!.message, { fields })
  if (powerD === biometry.k1D || powerD === biometry.k2D) refuse('biometry.unit-mix-up', `${powerD} is this eye's corneal power. Enter the power of the lens.`, 'powerD', `${powerLimits.min} to ${powerLimits.max} D`)
}

function predictionOf(id: FormulaId, input: SecondCheckInput, constants: CompleteConstants): FormulaPrediction {
  const seen = formulaEye(id, input.biometry, constants)
  const predictedD = refractionForPower(seen.optics, input.powerD)
  const fromTargetD = predictedD - input.targetD
  return {
    formula: id,
    label: formulaLabels[id],
    predictedD,
    fromTargetD,
    withinLimit: Math.abs(fromTargetD) <= input.limitD + tolerance,
    lensPositionMm: seen.optics.lensPositionMm,
    constantConverted: constants.converted.includes(id),
    howWorkedOut: howWorkedOut(seen),
  }
}

function cautionsFor({ biometry }: SecondCheckInput, constants: CompleteConstants, refused: FormulaRefusal[]): string[] {
  const cautions: string[] = []
  if (refused.length) cautions.push(`${formulaIds.length - refused.length} of ${formulaIds.length} formulas were worked out: ${refused.map(each => each.message).join(' ')}`)
  if (constants.converted.length) cautions.push(`Constants converted from the A constant, not optimised: ${constants.converted.map(id => formulaLabels[id]).join(', ')}. A converted Haigis lies up to about 1 D from the others.`)
  if (biometry.axialLengthMm < 22 || biometry.axialLengthMm > 26) cautions.push('The four formulas differ more in short and long eyes; see which one the publications prefer.')
  if (Math.abs(biometry.k2D - biometry.k1D) > 2.5) cautions.push('More than 2.5 D of corneal astigmatism: a mean K says less about this cornea.')
  return cautions
}

/**
 * An independent check of a lens power that somebody has chosen: what four published formulas predict with it, how far
 * apart they are, and which of them the publications prefer at this length. It chooses no lens and proposes no power.
 *
 * @throws DomainError when nothing may be worked out: measurements (`biometry.unit-mix-up`, `biometry.out-of-range`),
 * an eye that none of the formulas was made for (`biometry.eye-out-of-formula-range`), an operated cornea
 * (`biometry.cornea-operated`), constants, plan, or every formula refused (`biometry.no-formula-usable`).
 */
export function secondCheck(input: SecondCheckInput): SecondCheck {
  const { biometry, powerD, targetD, limitD } = input
  requireStorable(biometry)
  requirePlan(input)
  if (input.cornealRefractiveSurgery) refuse('biometry.cornea-operated', 'After refractive surgery of the cornea none of these formulas may be used: they misjudge both the corneal power and the lens position.', 'cornealRefractiveSurgery', 'a cornea that was never reshaped')
  requireUsable(biometry)
  const constants = completeConstants(input.constants)
  const predictions: FormulaPrediction[] = []
  const refused: FormulaRefusal[] = []
  let lowest = Infinity
  let highest = -Infinity
  for (const id of formulaIds) {
    try {
      const prediction = predictionOf(id, input, constants)
      predictions.push(prediction)
      lowest = Math.min(lowest, prediction.predictedD)
      highest = Math.max(highest, prediction.predictedD)
    }
    catch (error) {
      if (!(error instanceof DomainError)) throw error
      refused.push({ formula: id, label: formulaLabels[id], code: error.code, message: error.message, fields: error.fields })
    }
  }
  if (predictions.length === 0) throw new DomainError('biometry.no-formula-usable', `The second check could not be worked out. ${refused[0]!.message}`, { fields: refused.flatMap(each => each.fields), detail: { refused } })
  const outsideLimit = predictions.filter(each => !each.withinLimit).map(each => each.formula)
  return {
    version: secondCheckVersion,
    eye: biometry.eye,
    powerD,
    targetD,
    limitD,
    predictions,
    refused,
    spreadD: highest - lowest,
    agreement: outsideLimit.length ? 'differs' : 'agrees',
    outsideLimit,
    preferred: preferencesFor(biometry.axialLengthMm),
    constants,
    cautions: cautionsFor(input, constants, refused),
  }
}
