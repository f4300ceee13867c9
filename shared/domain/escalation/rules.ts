import { pressureRules } from '#shared/domain/escalation/pressure-rules'
import type { EscalationRule, RuleLabel } from '#shared/domain/escalation/rule-kit'
import { frontRules } from '#shared/domain/escalation/rules-front'
import { sightRules } from '#shared/domain/escalation/rules-sight'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

/** Names the whole table a review was evaluated with. */
export const rulesVersion = '2026-12-01'

/**
 * Every rule of a signed sheet, in the order in which they are asked: list.cluster, pain.moderate and pressure.raised look at rules
 * before them. Starting values. High ultrasound energy, long surgery and a dense nucleus are deliberately absent: they shape
 * the visit, not the alarm (common practice).
 */
export const escalationRules: readonly EscalationRule[] = [...frontRules, ...pressureRules, ...sightRules]

interface ActRule { id: string, version: number, when: string, source: string, label: RuleLabel }

/** Rules that an act fires, not a sheet. */
export const actRules = {
  missing: { id: 'visit.missing', version: 1, when: 'A day-one patient is not found when the missing-patient steps end', source: 'proposed', label: 'proposed' },
  byHand: { id: 'hand.raised', version: 1, when: 'A clinician asks', source: 'A clinician asks', label: 'common practice' },
} as const satisfies Record<string, ActRule>

/** The reason for a day-one patient who was not found. Today, always. */
export function missingPatientReason(visitId: string): EscalationReason {
  return { ruleId: actRules.missing.id, ruleVersion: actRules.missing.version, urgency: 'today', sentence: 'Not found for the day-one check.', source: actRules.missing.source, findings: { visitId } }
}

/** The reason of a clinician who asks for a surgeon, in their own words and with the urgency they chose. */
export function handRaisedReason(urgency: Urgency, words: string): EscalationReason {
  return { ruleId: actRules.byHand.id, ruleVersion: actRules.byHand.version, urgency, sentence: words.trim(), source: actRules.byHand.source, findings: {} }
}
