import { describe, expect, test } from 'vitest'
import { DomainError } from '#shared/domain/errors'
import { evaluateReview } from '#shared/domain/escalation/evaluate'
import { escalationRules } from '#shared/domain/escalation/rules'
import { applyThresholds, checkThresholds } from '#shared/domain/escalation/thresholds'
import { dayOneContext, quietFindings } from '#tests/factories/escalation'

const limits = escalationRules.flatMap(rule => Object.entries(rule.thresholds).map(([name, threshold]) => [`${rule.id}.${name}`, rule.id, name, threshold] as const))
function refused(work: () => unknown): DomainError {
  try {
    work()
  }
  catch (error) {
    if (error instanceof DomainError) return error
    throw error
  }
  throw new Error('nothing was refused')
}

describe('tuning a limit', () => {
  test.each(limits)('%s goes as far as its safe bounds and no further', (field, ruleId, name, threshold) => {
    const [least, most] = threshold.safe
    const step = (most - least) / 100
    for (const value of [least, (least + most) / 2, most]) expect(() => checkThresholds({ [ruleId]: { [name]: value } })).not.toThrow()
    const loose = threshold.tighten === 'lower' ? most + step : least - step
    const tight = threshold.tighten === 'lower' ? least - step : most + step
    expect(refused(() => checkThresholds({ [ruleId]: { [name]: loose } }))).toMatchObject({ code: 'escalation.invalid', fields: [{ field, code: 'loosened', limit: `${least} to ${most} ${threshold.unit}` }] })
    expect(refused(() => checkThresholds({ [ruleId]: { [name]: tight } }))).toMatchObject({ code: 'escalation.invalid', fields: [{ field, code: 'out-of-range' }] })
    expect(refused(() => checkThresholds({ [ruleId]: { [name]: Number.NaN } })).code).toBe('escalation.invalid')
  })

  test.each([['pain.mild', 'from'], ['pain.severe', 'upTo'], ['pain.severe', 'toString']])('%s has no limit %s', (ruleId, name) => {
    expect(refused(() => checkThresholds({ [ruleId]: { [name]: 5 } }))).toMatchObject({ code: 'escalation.invalid', fields: [{ code: 'unknown' }] })
  })

  test('a change joins the earlier ones, is taken back with the table’s own value, and changes neither argument', () => {
    const current = { 'pain.severe': { from: 6 } }
    const changed = applyThresholds(current, { 'pain.moderate': { from: 3 } })
    expect(changed).toEqual({ 'pain.severe': { from: 6 }, 'pain.moderate': { from: 3 } })
    expect(current).toEqual({ 'pain.severe': { from: 6 } })
    expect(applyThresholds(changed, { 'pain.severe': { from: 7 } })).toEqual({ 'pain.moderate': { from: 3 } })
    expect(refused(() => applyThresholds(changed, { 'pain.severe': { from: 8 } })).code).toBe('escalation.invalid')
  })

  test.each([
    ['pain.severe', { from: 5 }, { painScore: 5 }, 'now'],
    ['pressure.raised', { todayFromMmHg: 26 }, { iopMmHg: 26 }, 'today'],
    ['pressure.raised', { todayFromMmHg: 25, nowFromMmHg: 32 }, { iopMmHg: 32 }, 'now'],
    ['pressure.low', { todayUpToMmHg: 7 }, { iopMmHg: 7 }, 'today'],
    ['pressure.rise', { riseMmHg: 5 }, { iopMmHg: 27 }, 'today'],
    ['pressure.symptoms', { fromMmHg: 25, painFrom: 2 }, { iopMmHg: 25, painScore: 2 }, 'now'],
  ] as const)('a site’s tighter %s %j turns %j into %s', (ruleId, values, findings, urgency) => {
    const context = { ...dayOneContext, preoperative: { iopMmHg: 18, bestLogMar: 0.5 } }
    expect(evaluateReview({ ...quietFindings, ...findings }, context).urgency).not.toBe(urgency)
    expect(evaluateReview({ ...quietFindings, ...findings }, context, { [ruleId]: values }).urgency).toBe(urgency)
  })

  test('a tighter limit is kept although a rise has already been counted', () => {
    const context = { ...dayOneContext, preoperative: { iopMmHg: 18, bestLogMar: 0.5 } }
    expect(evaluateReview({ ...quietFindings, iopMmHg: 33 }, context).urgency).toBe('today')
    expect(evaluateReview({ ...quietFindings, iopMmHg: 33 }, context, { 'pressure.raised': { nowFromMmHg: 32 } }).urgency).toBe('now')
  })
})
