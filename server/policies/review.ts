import { hasRoleAt } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

/** Who may record and sign findings: optometrists and surgeons of the site, and the practice's own optometrist for a shared pathway. */
export function mayReview(actor: Actor, pathway: { siteId: string, practiceId: string | null }): boolean {
  return hasRoleAt(actor, pathway.siteId, 'optometrist', 'surgeon', 'clinical-lead')
    || actor.roles.some(role => role.role === 'optometrist' && role.practiceId !== null && role.practiceId === pathway.practiceId)
}
