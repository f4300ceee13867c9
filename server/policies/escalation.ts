import { hasRoleAt } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

/** Answering an escalation is a surgeon's act. */
export function mayAnswer(actor: Actor, escalation: { siteId: string }): boolean {
  return hasRoleAt(actor, escalation.siteId, 'surgeon', 'clinical-lead')
}

/** Whoever examines or cares for the eye may ask for a surgeon. */
export function mayRaise(actor: Actor, pathway: { siteId: string, practiceId: string | null }): boolean {
  return hasRoleAt(actor, pathway.siteId, 'nurse', 'optometrist', 'surgeon', 'clinical-lead')
    || actor.roles.some(role => role.role === 'optometrist' && role.practiceId !== null && role.practiceId === pathway.practiceId)
}
