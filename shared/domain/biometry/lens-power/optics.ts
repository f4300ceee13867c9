import { DomainError } from '#shared/domain/errors'
import type { EyeBiometry, FormulaId, HowWorkedOut, NamedValue, SourceLabel } from '#shared/domain/biometry/vocabulary'
import { formulaLabels } from '#shared/domain/biometry/vocabulary'

/** Vertex distance of the spectacle plane: 12 mm in all four publications. */
export const vertexMm = 12
/** 1000 times the refractive index of aqueous and vitreous, 1.336. */
const aqueous = 1336

/**
 * An eye as a thin cornea and a thin lens. All four formulas end in this form; they differ only in how they
 * predict its three figures.
 */
export interface ThinLensEye {
  cornealPowerD: number
  /** Cornea to retina, in mm, as the formula takes it. */
  opticalLengthMm: number
  /** Cornea to lens, in mm: the effective lens position. */
  lensPositionMm: number
}

export interface Formula {
  id: FormulaId
  publication: string
  sourceLabel: SourceLabel
  /** Fields of `EyeBiometry` without which the formula cannot be used. */
  needs: readonly (keyof EyeBiometry)[]
}

/** What one formula makes of one eye and one lens model. */
export interface FormulaEye {
  formula: Formula
  optics: ThinLensEye
  inputs: NamedValue[]
  steps: NamedValue[]
  notes: string[]
}

export function refuse(code: string, message: string, field: string, limit: string, detail: Record<string, unknown> = {}): never {
  const kind = code.slice(code.indexOf('.') + 1)
  throw new DomainError(code, message, { fields: [{ field, code: kind, message, limit }], detail })
}

/** Lens positions that any published constant gives, anterior chamber lenses included ('common practice'). */
const lensPositionLimits = { min: 2, max: 10 }
/** Spectacle refractions in dioptres beyond which a result is a slip in the power, not a plan. */
export const refractionLimits = { min: -30, max: 30 }
/** Lens powers in dioptres that are made or ordered. */
export const powerLimits = { min: -20, max: 60 }

export function requireLensPosition(formula: Formula, lensPositionMm: number): void {
  if (lensPositionMm >= lensPositionLimits.min && lensPositionMm <= lensPositionLimits.max) return
  refuse('biometry.lens-position-out-of-range', `${formulaLabels[formula.id]} puts the lens ${lensPositionMm.toFixed(2)} mm behind the cornea, which no eye has. Check the constants, the K readings and the lengths.`, 'constants', `${lensPositionLimits.min} to ${lensPositionLimits.max} mm`, { formula: formula.id })
}

/**
 * Power in dioptres that gives a refraction at the spectacle plane, 12 mm before the cornea.
 * Thin-lens vergence: the light reaching the lens from the cornea plus the lens must focus on the retina.
 * @throws DomainError `biometry.refraction-out-of-range` beyond -30 to +30 D or where no such lens exists.
 */
export function powerForRefraction(eye: ThinLensEye, refractionD: number): number {
  if (!(refractionD >= refractionLimits.min && refractionD <= refractionLimits.max)) refuse('biometry.refraction-out-of-range', 'The refraction is outside what can be planned.', 'targetD', `${refractionLimits.min} to ${refractionLimits.max} D`)
  const { cornealPowerD, opticalLengthMm, lensPositionMm } = eye
  const corneal = cornealPowerD + refractionD / (1 - vertexMm / 1000 * refractionD)
  const power = aqueous / (opticalLengthMm - lensPositionMm) - aqueous * corneal / (aqueous - corneal * lensPositionMm)
  if (!Number.isFinite(power)) refuse('biometry.no-such-lens', 'No lens gives this refraction in this eye.', 'targetD', `${refractionLimits.min} to ${refractionLimits.max} D`)
  return power
}

/**
 * Refraction in dioptres at the spectacle plane that a lens power gives; the inverse of `powerForRefraction`.
 * @throws DomainError `biometry.power-out-of-range` beyond -20 to +60 D, `biometry.refraction-out-of-range` when the
 * result is beyond -30 to +30 D, which is a wrong power and not a plan.
 */
export function refractionForPower(eye: ThinLensEye, powerD: number): number {
  if (!(powerD >= powerLimits.min && powerD <= powerLimits.max)) refuse('biometry.power-out-of-range', 'The lens power is outside what is made. Enter the power in dioptres.', 'powerD', `${powerLimits.min} to ${powerLimits.max} D`)
  const { cornealPowerD, opticalLengthMm, lensPositionMm } = eye
  const behindLens = aqueous / (opticalLengthMm - lensPositionMm) - powerD
  const corneal = aqueous * behindLens / (aqueous + lensPositionMm * behindLens) - cornealPowerD
  const refraction = corneal / (1 + vertexMm / 1000 * corneal)
  if (!(refraction >= refractionLimits.min && refraction <= refractionLimits.max)) refuse('biometry.refraction-out-of-range', 'This lens would leave a refraction that no plan aims at. Check that the power belongs to this eye.', 'powerD', `${refractionLimits.min} to ${refractionLimits.max} D`)
  return refraction
}

/** The figures of one formula in the order in which they are worked out, for "How this is worked out". */
export function howWorkedOut(eye: FormulaEye): HowWorkedOut {
  const { formula, inputs, steps, notes, optics } = eye
  return {
    formula: formulaLabels[formula.id],
    publication: formula.publication,
    sourceLabel: formula.sourceLabel,
    inputs,
    steps: [
      ...steps,
      { name: 'Corneal power used', value: optics.cornealPowerD, unit: 'D' },
      { name: 'Optical length', value: optics.opticalLengthMm, unit: 'mm' },
      { name: 'Lens position', value: optics.lensPositionMm, unit: 'mm' },
      { name: 'Vertex distance', value: vertexMm, unit: 'mm' },
    ],
    notes,
  }
}
