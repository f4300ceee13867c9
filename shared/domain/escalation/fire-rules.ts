import { moreUrgent } from '#shared/domain/escalation/merge'
import { escalationRules } from '#shared/domain/escalation/rules'
import { thresholdsOf } from '#shared/domain/escalation/thresholds'
import type { ThresholdOverrides } from '#shared/domain/escalation/thresholds'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'

/** Asks every rule in the order of the table; each is told which rules before it have fired. */
export function fireRules(findings: ReviewFindings, context: ReviewContext, overrides: ThresholdOverrides): EscalationReason[] {
  const reasons: EscalationReason[] = []
  const fired = new Set<string>()
  for (const rule of escalationRules) {
    const hit = rule.evaluate(findings, context, thresholdsOf(rule, overrides[rule.id]), fired)
    if (!hit) continue
    fired.add(rule.id)
    const reason: EscalationReason = { ruleId: rule.id, ruleVersion: rule.version, urgency: hit.urgency, sentence: hit.sentence, source: hit.source ?? rule.source, findings: picked(findings, hit.fired) }
    if (hit.alsoTell) reason.alsoTell = hit.alsoTell
    if (hit.beside) Object.assign(reason.findings, hit.beside)
    reasons.push(reason)
  }
  return reasons
}

/** The highest urgency among reasons; null when there are none. */
export function highestOf(reasons: readonly EscalationReason[]): Urgency | null {
  return reasons.length ? reasons.map(reason => reason.urgency).reduce(moreUrgent) : null
}

function picked(findings: ReviewFindings, fields: readonly (keyof ReviewFindings)[]): Record<string, unknown> {
  const taken: Record<string, unknown> = {}
  for (const field of fields) if (findings[field] !== undefined) taken[field] = findings[field]
  return taken
}
