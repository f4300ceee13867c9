import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import type { FormulaId, LensConstants } from '#shared/domain/biometry/vocabulary'

/** All constants of one lens model, and which of them were converted from the A constant rather than given. */
export interface CompleteConstants {
  aConstant: number
  surgeonFactorMm: number
  personalAcdMm: number
  haigis: { a0Mm: number, a1: number, a2: number }
  converted: FormulaId[]
}

/** ACD constant in mm of SRK/T: Retzlaff, Sanders, Kraff, J Cataract Refract Surg 1990;16:333-340 (from memory). */
export const acdConstantFromA = (aConstant: number) => 0.62467 * aConstant - 68.747
export const aFromAcdConstant = (acdConstantMm: number) => (acdConstantMm + 68.747) / 0.62467
/** Personal chamber depth in mm: Holladay et al., J Cataract Refract Surg 1988;14:17-24 (from memory; restated by Haigis). */
export const personalAcdFromA = (aConstant: number) => 0.58357 * aConstant - 63.896
export const aFromPersonalAcd = (personalAcdMm: number) => (personalAcdMm + 63.896) / 0.58357
/**
 * Surgeon factor in mm from the personal depth: Holladay et al. 1988 (from memory). The paper's other form,
 * 0.5663 A - 65.60, follows from this one to 0.004 mm and is therefore not a second conversion.
 */
export const surgeonFactorFromPersonalAcd = (personalAcdMm: number) => 0.9704 * personalAcdMm - 3.595
export const surgeonFactorFromA = (aConstant: number) => 0.5663 * aConstant - 65.60
export const aFromSurgeonFactor = (surgeonFactorMm: number) => (surgeonFactorMm + 65.60) / 0.5663

/** Preset slopes of Haigis, and the mean chamber depth and axial length on which his a0 conversion rests. */
const haigisStart = { a1: 0.4, a2: 0.1, meanDepthMm: 3.37, meanLengthMm: 23.39 }
/**
 * Haigis a0 in mm for a1 0.4, a2 0.1: the ACD constant less the slopes at his mean eye, 0.62467 A - 72.434
 * (Haigis, in Shammas (ed), Intraocular Lens Power Calculations, 2004; from memory). A start value: eyes come out up
 * to about 1 D stronger than with optimised constants.
 */
export const haigisFromA = (aConstant: number) => ({
  a0Mm: acdConstantFromA(aConstant) - haigisStart.a1 * haigisStart.meanDepthMm - haigisStart.a2 * haigisStart.meanLengthMm,
  a1: haigisStart.a1,
  a2: haigisStart.a2,
})

const limits = {
  'aConstant': { min: 110, max: 125, unit: '', label: 'A constant' },
  'surgeonFactorMm': { min: -3, max: 6, unit: ' mm', label: 'Surgeon factor' },
  'personalAcdMm': { min: 2, max: 9, unit: ' mm', label: 'Personal chamber depth' },
  'haigis.a0Mm': { min: -15, max: 10, unit: ' mm', label: 'Haigis a0' },
  'haigis.a1': { min: -1.5, max: 2, unit: '', label: 'Haigis a1' },
  'haigis.a2': { min: -0.5, max: 1, unit: '', label: 'Haigis a2' },
} as const
type ConstantName = keyof typeof limits

function problemsOf(given: Partial<Record<ConstantName, number | undefined>>): FieldProblem[] {
  return (Object.keys(given) as ConstantName[]).flatMap((name): FieldProblem[] => {
    const value: unknown = given[name]
    const { min, max, unit, label } = limits[name]
    const limit = `${min} to ${max}${unit}`
    if (typeof value !== 'number' || !Number.isFinite(value)) return [{ field: `constants.${name}`, code: 'not-a-number', message: `${label} is missing or is not a number.`, limit }]
    if (value >= min && value <= max) return []
    const swapped = name !== 'aConstant' && value >= 110 && value <= 125
    return [{ field: `constants.${name}`, code: swapped ? 'unit-mix-up' : 'out-of-range', message: swapped ? `${value} looks like an A constant, not a ${label.toLowerCase()}.` : `${label} ${value} is outside ${limit}. Check the constant of this lens model.`, limit }]
  })
}

/**
 * Fills in the constants that were not given, from the A constant, by the published conversions.
 * @throws DomainError `biometry.constants-out-of-range` naming each constant that no lens has.
 */
export function completeConstants(given: LensConstants): CompleteConstants {
  if (typeof given !== 'object' || given === null) throw new DomainError('biometry.constants-out-of-range', 'No lens constants were given.', { fields: [{ field: 'constants', code: 'required', message: 'Enter at least the A constant.', limit: '110 to 125' }] })
  const { aConstant, surgeonFactorMm, personalAcdMm, haigis } = given
  const fields = problemsOf({
    aConstant,
    ...(surgeonFactorMm === undefined ? {} : { surgeonFactorMm }),
    ...(personalAcdMm === undefined ? {} : { personalAcdMm }),
    ...(haigis === undefined ? {} : { 'haigis.a0Mm': haigis.a0Mm, 'haigis.a1': haigis.a1, 'haigis.a2': haigis.a2 }),
  })
  if (fields.length) throw new DomainError('biometry.constants-out-of-range', fields[0]!.message, { fields })
  const converted: FormulaId[] = []
  if (surgeonFactorMm === undefined) converted.push('holladay-1')
  if (personalAcdMm === undefined) converted.push('hoffer-q')
  if (haigis === undefined) converted.push('haigis')
  return {
    aConstant,
    surgeonFactorMm: surgeonFactorMm ?? surgeonFactorFromA(aConstant),
    personalAcdMm: personalAcdMm ?? personalAcdFromA(aConstant),
    haigis: haigis ?? haigisFromA(aConstant),
    converted,
  }
}
