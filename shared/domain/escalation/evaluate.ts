import { fireRules, highestOf } from '#shared/domain/escalation/fire-rules'
import type { ThresholdOverrides } from '#shared/domain/escalation/thresholds'
import { uncheckedOf } from '#shared/domain/escalation/unchecked'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'

export { rulesVersion } from '#shared/domain/escalation/rules'
export { applyThresholds, checkThresholds } from '#shared/domain/escalation/thresholds'
export { missingRequiredFindings } from '#shared/domain/escalation/unchecked'
export { wouldBecome } from '#shared/domain/escalation/would-become'
export type { ThresholdOverrides }

export interface ReviewOutcome {
  /** Most urgent first, else in the order of the table. */
  reasons: EscalationReason[]
  urgency: Urgency | null
  /** What could not be checked because it was not recorded. */
  unchecked: string[]
}

/**
 * Evaluates every rule on one sheet: the same function on the page ("what this will raise") and on the server at signing.
 * Pure, deterministic and total: any partial findings give an answer, and nothing unrecorded is read as normal.
 *
 * Making one finding worse never lowers the urgency, with one exception that the rule table asks for: in the first week corneal
 * oedema 2 or more is a reason for poor sight, and so takes `vision.worse` away.
 */
export function evaluateReview(findings: ReviewFindings, context: ReviewContext, overrides: ThresholdOverrides = {}): ReviewOutcome {
  const reasons = fireRules(findings, context, overrides)
  reasons.sort((left, right) => urgencies.indexOf(left.urgency) - urgencies.indexOf(right.urgency))
  return { reasons, urgency: highestOf(reasons), unchecked: uncheckedOf(findings, context) }
}
