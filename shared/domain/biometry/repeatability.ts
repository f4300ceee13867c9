import { DomainError } from '#shared/domain/errors'
import { meridianAngle } from '#shared/domain/biometry/plausibility-rules'
import { requireStorable } from '#shared/domain/biometry/limits'
import type { EyeBiometry, SourceLabel } from '#shared/domain/biometry/vocabulary'

export interface RepeatabilityRule {
  id: string
  version: number
  field: 'axialLengthMm' | 'k1D' | 'k2D' | 'anteriorChamberDepthMm' | 'k2AxisDegrees'
  /** Largest spread (greatest less smallest) that counts as agreement. */
  most: number
  unit: string
  source: string
  sourceLabel: SourceLabel
  label: string
}

const retest = 'Test and retest of 121 eyes a month apart, 95 % limits, J Cataract Refract Surg 2010;36:1474-1478'

export const repeatabilityRules: readonly RepeatabilityRule[] = [
  { id: 'repeat.axial-length', version: 1, field: 'axialLengthMm', most: 0.06, unit: 'mm', source: retest, sourceLabel: 'citation', label: 'Axial length' },
  { id: 'repeat.k1', version: 1, field: 'k1D', most: 0.55, unit: 'D', source: retest, sourceLabel: 'citation', label: 'K1' },
  { id: 'repeat.k2', version: 1, field: 'k2D', most: 0.55, unit: 'D', source: retest, sourceLabel: 'citation', label: 'K2' },
  { id: 'repeat.chamber-depth', version: 1, field: 'anteriorChamberDepthMm', most: 0.2, unit: 'mm', source: retest, sourceLabel: 'citation', label: 'Chamber depth' },
  { id: 'repeat.steep-meridian', version: 1, field: 'k2AxisDegrees', most: 10, unit: 'degrees', source: 'Taught with repeated keratometry', sourceLabel: 'common practice', label: 'Steep meridian' },
]

export interface RepeatabilityFinding extends Pick<RepeatabilityRule, 'source' | 'sourceLabel' | 'unit'> {
  ruleId: string
  ruleVersion: number
  answer: 'pass' | 'not-measured' | 'warn'
  field: string
  readings: number
  spread?: number
  most: number
  sentence: string
}

const tolerance = 1e-9
/** Below this mean astigmatism the meridian wanders by itself. */
const leastAstigmatismD = 0.5

/** Smallest arc that holds all meridians, as its largest pairwise angle: 178 and 2 degrees lie 4 apart. */
function spreadOf(rule: RepeatabilityRule, values: number[]): number {
  if (rule.field !== 'k2AxisDegrees') return Math.max(...values) - Math.min(...values)
  return Math.max(...values.flatMap((one, index) => values.slice(index + 1).map(other => meridianAngle(one, other))))
}

function judged(rule: RepeatabilityRule, readings: readonly EyeBiometry[]): RepeatabilityFinding {
  const values = readings.map(each => each[rule.field]).filter((value): value is number => value !== undefined && value !== null)
  const { id, version, field, most, unit, source, sourceLabel, label } = rule
  const base = { ruleId: id, ruleVersion: version, field, readings: values.length, most, unit, source, sourceLabel }
  const round = field === 'k2AxisDegrees' && readings.some(each => Math.abs(each.k2D - each.k1D) < leastAstigmatismD)
  if (values.length < 2 || round) return { ...base, answer: 'not-measured', sentence: round ? 'Too little astigmatism to compare meridians.' : 'Measured less than twice, so not judged.' }
  const spread = spreadOf(rule, values)
  const apart = spread > most + tolerance
  return { ...base, spread, answer: apart ? 'warn' : 'pass', sentence: apart ? `${label}: ${values.length} readings lie ${Number(spread.toFixed(2))} ${unit} apart, more than ${most} ${unit}. Measure again.` : `${label}: ${values.length} readings agree within ${most} ${unit}.` }
}

/**
 * Do repeated measurements of one eye agree? Limits are of readings taken apart in time on one optical device;
 * readings of two devices must not be compared by them.
 * @throws DomainError `biometry.too-few-readings` for fewer than two, `biometry.eyes-mixed` for two different eyes, and as
 * `requireStorable` for any reading that cannot be stored.
 */
export function checkRepeatability(readings: readonly EyeBiometry[]): RepeatabilityFinding[] {
  if (!Array.isArray(readings) || readings.length < 2) throw new DomainError('biometry.too-few-readings', 'Two readings of an eye are needed to compare them.', { fields: [{ field: 'readings', code: 'too-few', message: 'Measure at least twice.', limit: '2 or more' }] })
  readings.forEach(requireStorable)
  if (readings.some(each => each.eye !== readings[0]!.eye)) throw new DomainError('biometry.eyes-mixed', 'The readings are of two different eyes.', { fields: [{ field: 'readings', code: 'eyes-mixed', message: 'Compare readings of one eye.', limit: 'one eye' }] })
  return repeatabilityRules.map(rule => judged(rule, readings))
}
