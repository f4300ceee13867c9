import { DomainError } from '#shared/domain/errors'
import type { EscalationRule, Thresholds } from '#shared/domain/escalation/rule-kit'
import { escalationRules } from '#shared/domain/escalation/rules'

/** A site's tightened limits by rule and name. Only what differs from the table is kept. */
export type ThresholdOverrides = Record<string, Thresholds>

const published = new Map<string, Thresholds>(escalationRules.map(rule => [rule.id, Object.fromEntries(Object.entries(rule.thresholds).map(([name, threshold]) => [name, threshold.value]))]))

/** A rule's limits with a site's tightened values. A name that the rule does not have is ignored. */
export function thresholdsOf(rule: EscalationRule, tightened: Thresholds | undefined): Thresholds {
  const base = published.get(rule.id) ?? {}
  if (!tightened) return base
  return Object.fromEntries(Object.entries(base).map(([name, value]) => [name, tightened[name] ?? value]))
}

/**
 * Checks tightened limits before they are kept.
 * @throws DomainError `escalation.invalid` for an unknown rule or name, or a value outside its safe bounds. The loose end of the bounds
 * is the table's own value, so that nothing can be made looser than it was published.
 */
export function checkThresholds(overrides: ThresholdOverrides): void {
  for (const [ruleId, values] of Object.entries(overrides)) {
    const rule = escalationRules.find(each => each.id === ruleId)
    if (!rule) throw unknown(ruleId)
    for (const [name, value] of Object.entries(values)) checkOne(rule, name, value)
  }
}

function checkOne(rule: EscalationRule, name: string, value: number): void {
  const field = `${rule.id}.${name}`
  const threshold = Object.hasOwn(rule.thresholds, name) ? rule.thresholds[name] : undefined
  if (!threshold) throw unknown(field)
  const [least, most] = threshold.safe
  if (value >= least && value <= most) return
  const range = `${least} to ${most} ${threshold.unit}`
  const isLooser = threshold.tighten === 'lower' ? value > threshold.value : value < threshold.value
  throw new DomainError('escalation.invalid', isLooser ? `${field} may be ${range}: looser than published is refused.` : `${field} may be ${range}: beyond what is safe is refused.`, {
    fields: [{ field, code: isLooser ? 'loosened' : 'out-of-range', message: `Use ${range}.`, limit: range }],
  })
}

function unknown(field: string): DomainError {
  return new DomainError('escalation.invalid', `There is no limit ${field}.`, { fields: [{ field, code: 'unknown', message: 'There is no such limit.' }] })
}

/**
 * A site's limits after a clinical lead's change: each new value replaces the old one, and a value equal to the table's is forgotten.
 * A lead may take back their own tightening, never go beyond the table. Neither argument is changed.
 * @throws DomainError `escalation.invalid`, see `checkThresholds`.
 */
export function applyThresholds(current: ThresholdOverrides, changes: ThresholdOverrides): ThresholdOverrides {
  checkThresholds(changes)
  const next: ThresholdOverrides = {}
  for (const rule of escalationRules) {
    const values = Object.entries({ ...current[rule.id], ...changes[rule.id] }).filter(([name, value]) => rule.thresholds[name] !== undefined && rule.thresholds[name].value !== value)
    if (values.length) next[rule.id] = Object.fromEntries(values)
  }
  return next
}
