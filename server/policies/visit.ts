import { hasRoleAt } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

/** Booking, moving, cancelling and running the clinic list: the nurse's and coordinator's work. */
export function mayRunClinic(actor: Actor, siteId: string): boolean {
  return hasRoleAt(actor, siteId, 'nurse', 'coordinator')
}

/** An optometrist or surgeon takes a patient into the room as well as the nurse. */
export function maySendIn(actor: Actor, siteId: string): boolean {
  return hasRoleAt(actor, siteId, 'nurse', 'optometrist', 'surgeon', 'clinical-lead')
}

export function mayBook(actor: Actor, siteId: string): boolean {
  return hasRoleAt(actor, siteId, 'nurse', 'coordinator', 'surgeon', 'clinical-lead', 'optometrist')
}

/** Clinic sessions and their places are made, changed and closed by the coordinator, or the clinical lead who answers for them. */
export function mayRunSessions(actor: Actor, siteId: string): boolean {
  return hasRoleAt(actor, siteId, 'coordinator', 'clinical-lead')
}
