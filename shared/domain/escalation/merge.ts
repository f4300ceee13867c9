import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

export function moreUrgent(left: Urgency, right: Urgency): Urgency {
  return urgencies.indexOf(left) <= urgencies.indexOf(right) ? left : right
}

/**
 * Joins new reasons to those of an open escalation. A rule that fired before keeps its more urgent firing; urgency only rises.
 * Reasons come back most urgent first, else in the order in which they arose.
 */
export function mergeReasons(existing: readonly EscalationReason[], added: readonly EscalationReason[]): { reasons: EscalationReason[], urgency: Urgency } {
  const byRule = new Map<string, EscalationReason>()
  for (const reason of [...existing, ...added]) {
    const known = byRule.get(reason.ruleId)
    // A milder firing does not take back what was said before; an equal or worse one brings the newer findings.
    if (!known || moreUrgent(reason.urgency, known.urgency) === reason.urgency) byRule.set(reason.ruleId, reason)
  }
  const reasons = [...byRule.values()].sort((left, right) => urgencies.indexOf(left.urgency) - urgencies.indexOf(right.urgency))
  return { reasons, urgency: reasons.map(reason => reason.urgency).reduce(moreUrgent, 'this-week') }
}
