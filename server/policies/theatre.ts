import { hasRoleAt } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

/** The list is its surgeon's to lock; a clinical lead may stand in. */
export function mayLockList(actor: Actor, list: { siteId: string, surgeonId: string }): boolean {
  return hasRoleAt(actor, list.siteId, 'clinical-lead') || (actor.personId === list.surgeonId && hasRoleAt(actor, list.siteId, 'surgeon'))
}

/** A printed list names patients, eyes and lenses: for the people of that theatre. */
export function mayPrintList(actor: Actor, siteId: string): boolean {
  return hasRoleAt(actor, siteId, 'coordinator', 'nurse', 'surgeon', 'clinical-lead')
}
