import { hasRoleAt, sitesWithRole } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

const readers = ['nurse', 'coordinator', 'optometrist', 'surgeon', 'clinical-lead'] as const

/** Whose replies this person reads: those of the sites where they care for patients. */
export function replySites(actor: Actor): string[] {
  return sitesWithRole(actor, ...readers)
}

/** Writing to a patient and settling a reply: the nurse's and coordinator's work, and a surgeon's. */
export function mayWrite(actor: Actor, siteId: string): boolean {
  return hasRoleAt(actor, siteId, 'nurse', 'coordinator', 'surgeon', 'clinical-lead')
}
