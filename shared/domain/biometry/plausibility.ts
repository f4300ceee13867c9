import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import { biometryProblems } from '#shared/domain/biometry/limits'
import { isOutside, oneEyeRules, storableRule, twoEyeRules } from '#shared/domain/biometry/plausibility-rules'
import type { PlausibilityRule, Reading } from '#shared/domain/biometry/plausibility-rules'
import type { EyeBiometry, PlausibilityAnswer, SourceLabel } from '#shared/domain/biometry/vocabulary'

export interface PlausibilityFinding {
  ruleId: string
  ruleVersion: number
  answer: PlausibilityAnswer
  fields: readonly string[]
  /** What the rule measured, in `unit`; absent when not measured. */
  value?: number
  unit: string
  threshold: string
  source: string
  sourceLabel: SourceLabel
  /** Plain words; for `warn` and `refuse` what to do. */
  sentence: string
  /** The field-by-field words of a refusal. */
  problems?: FieldProblem[]
}

export interface PlausibilityReport {
  /** The worst answer of all rules; a value that was not measured does not spoil a pass. */
  verdict: 'pass' | 'warn' | 'refuse'
  /** Every rule that was asked, in the order of the table. */
  findings: PlausibilityFinding[]
  /** Only what has to be repeated or explained by name before the biometry can be accepted. */
  warnings: PlausibilityFinding[]
}

function withUnit(value: number, unit: string): string {
  const words = String(Number(value.toFixed(unit === '' ? 4 : 2)))
  return unit === '' ? words : `${words} ${unit}`
}

function findingOf(rule: PlausibilityRule, reading: Reading | undefined): PlausibilityFinding {
  const base = { ruleId: rule.id, ruleVersion: rule.version, fields: rule.fields, unit: rule.unit, threshold: rule.threshold, source: rule.source, sourceLabel: rule.sourceLabel }
  if (reading === undefined) return { ...base, answer: 'not-measured', sentence: 'Not measured, so not judged.' }
  const outside = isOutside(reading)
  return { ...base, value: reading.value, answer: outside ? 'warn' : 'pass', sentence: outside ? rule.sentence(withUnit(reading.value, rule.unit)) : `${withUnit(reading.value, rule.unit)}: nothing unusual.` }
}

function refusal(problems: FieldProblem[]): PlausibilityReport {
  const { id, version, unit, threshold, source, sourceLabel } = storableRule
  const findings: PlausibilityFinding[] = problems.map(problem => ({
    ruleId: id, ruleVersion: version, answer: 'refuse', fields: [problem.field], unit, threshold: problem.limit ?? threshold, source, sourceLabel, sentence: problem.message, problems: [problem],
  }))
  return { verdict: 'refuse', findings, warnings: [] }
}

function reportOf(findings: PlausibilityFinding[]): PlausibilityReport {
  const warnings = findings.filter(each => each.answer === 'warn')
  return { verdict: warnings.length ? 'warn' : 'pass', findings, warnings }
}

/**
 * Judges one eye's measurements, and the two eyes against each other when the fellow's are known.
 *
 * `refuse`: a value cannot be stored, or a known slip of units explains it (named in the sentence). `warn`: repeat the
 * measurement or explain it by name. An absent optional value is `not-measured`, never a pass. Between-eye rules are
 * asked only when the fellow eye's own values can be stored, so that its slip is not blamed on this eye.
 * @throws DomainError `biometry.same-eye-twice` when both sets are of one eye.
 */
export function checkPlausibility(eye: EyeBiometry, fellow?: EyeBiometry): PlausibilityReport {
  const problems = biometryProblems(eye)
  if (problems.length) return refusal(problems)
  if (fellow && fellow.eye === eye.eye) throw new DomainError('biometry.same-eye-twice', 'Both sets of measurements are of the same eye. Compare a right eye with a left eye.', { fields: [{ field: 'fellow.eye', code: 'same-eye', message: 'Give the other eye.', limit: eye.eye === 'right' ? 'left' : 'right' }] })
  const findings = oneEyeRules.map(rule => findingOf(rule, rule.read(eye)))
  if (fellow && biometryProblems(fellow).length === 0) findings.push(...twoEyeRules.map(rule => findingOf(rule, rule.read(eye, fellow))))
  return reportOf(findings)
}
