import type { FieldProblem } from '#shared/domain/errors'
import type { RiskFactors } from '#shared/domain/theatre/vocabulary'
import { DomainError } from '#shared/domain/errors'
import { locsRange } from '#shared/domain/theatre/nuclear-density'
import { alphaBlockers, cataractKinds, pupilSizes, sexes, surgeonGrades } from '#shared/domain/theatre/vocabulary'

const ranges = [
  { field: 'ageYears', words: 'Age', min: 0, max: 120, unit: 'years', read: (factors: RiskFactors) => factors.ageYears },
  { field: 'axialLengthMm', words: 'Axial length', min: 14, max: 40, unit: 'mm', read: (factors: RiskFactors) => factors.axialLengthMm },
  { field: 'anteriorChamberDepthMm', words: 'Anterior chamber depth', min: 0.5, max: 6, unit: 'mm', read: (factors: RiskFactors) => factors.anteriorChamberDepthMm },
  { field: 'endothelialCellsPerMm2', words: 'Endothelial cell count', min: 0, max: 6000, unit: 'cells/mm²', read: (factors: RiskFactors) => factors.endothelialCellsPerMm2 },
  { field: 'locs.opalescence', words: 'Nuclear opalescence', min: locsRange.min, max: locsRange.max, unit: 'LOCS III', read: (factors: RiskFactors) => factors.locs?.opalescence },
  { field: 'locs.colour', words: 'Nuclear colour', min: locsRange.min, max: locsRange.max, unit: 'LOCS III', read: (factors: RiskFactors) => factors.locs?.colour },
] as const

const choices = [
  { field: 'sex', allowed: sexes, read: (factors: RiskFactors) => factors.sex },
  { field: 'pupil', allowed: pupilSizes, read: (factors: RiskFactors) => factors.pupil },
  { field: 'cataract', allowed: cataractKinds, read: (factors: RiskFactors) => factors.cataract },
  { field: 'alphaBlocker', allowed: alphaBlockers, read: (factors: RiskFactors) => factors.alphaBlocker },
  { field: 'surgeonGrade', allowed: surgeonGrades, read: (factors: RiskFactors) => factors.surgeonGrade },
] as const

/** @throws DomainError `theatre.factors-invalid` with every field that is out of range or not one of its words. */
export function checkFactors(factors: RiskFactors): void {
  const fields = [...rangeProblems(factors), ...locsStepProblems(factors), ...choiceProblems(factors)]
  if (fields.length) throw new DomainError('theatre.factors-invalid', 'Some findings cannot be used for the risk.', { fields })
}

function rangeProblems(factors: RiskFactors): FieldProblem[] {
  return ranges.flatMap(({ field, words, min, max, unit, read }) => {
    const value = read(factors)
    // NaN compares false with everything, so the test asks for being inside rather than outside.
    return value === undefined || (value >= min && value <= max)
      ? []
      : [{ field, code: 'out-of-range', message: `${words} must be ${min} to ${max} ${unit}.`, limit: `${min} to ${max} ${unit}` }]
  })
}

function locsStepProblems(factors: RiskFactors): FieldProblem[] {
  return ranges.filter(({ field }) => field.startsWith('locs.')).flatMap(({ field, words, read }) => {
    const value = read(factors)
    return value === undefined || !Number.isFinite(value) || Math.abs(value * 10 - Math.round(value * 10)) < 1e-6
      ? []
      : [{ field, code: 'step', message: `${words} is graded in tenths.`, limit: '0.1' }]
  })
}

function choiceProblems(factors: RiskFactors): FieldProblem[] {
  return choices.flatMap(({ field, allowed, read }) => {
    const value = read(factors)
    return value === undefined || (allowed as readonly string[]).includes(value)
      ? []
      : [{ field, code: 'unknown-word', message: `Choose one of: ${allowed.join(', ')}.` }]
  })
}
