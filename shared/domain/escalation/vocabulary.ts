import type { Urgency } from '#shared/domain/pathway/vocabulary'

export const escalationStates = ['open', 'acknowledged', 'closed'] as const
export type EscalationState = typeof escalationStates[number]

/** One reason of an escalation: the rule that fired, its version and the findings that fired it. */
export interface EscalationReason {
  ruleId: string
  ruleVersion: number
  urgency: Urgency
  sentence: string
  source: string
  alsoTell?: 'clinical-lead'
  findings: Record<string, unknown>
}
