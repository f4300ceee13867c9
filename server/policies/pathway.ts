import { hasRoleAt } from '#server/policies/scope'
import type { Actor, RoleName } from '#shared/domain/people/vocabulary'

/**
 * Who may do what with one pathway at its site. Nobody of a community practice moves a pathway, and a coordinator signs nothing clinical.
 * One table, so that the page's offer and the server's refusal cannot differ.
 */
export const pathwayActs = {
  advance: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead'],
  hold: ['coordinator', 'nurse', 'surgeon', 'clinical-lead'],
  release: ['coordinator', 'nurse', 'surgeon', 'clinical-lead'],
  close: ['coordinator', 'surgeon', 'clinical-lead'],
  reopen: ['surgeon', 'clinical-lead'],
  share: ['coordinator', 'nurse', 'surgeon', 'clinical-lead'],
  /** Another kind of first check than a day-one visit: the operating surgeon's judgement. */
  decideFirstCheck: ['surgeon', 'clinical-lead'],
  recordFirstCheck: ['nurse', 'optometrist', 'surgeon', 'clinical-lead'],
  decideFellowEye: ['optometrist', 'surgeon', 'clinical-lead'],
  sendLetter: ['coordinator', 'surgeon', 'clinical-lead'],
  /** The queue of referrals that wait for a decision. */
  seeTriage: ['coordinator', 'surgeon', 'clinical-lead'],
  importReferrals: ['coordinator', 'clinical-lead'],
  mergePatients: ['coordinator', 'surgeon', 'clinical-lead'],
  addAttachment: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead'],
  addReferral: ['coordinator', 'nurse', 'surgeon', 'clinical-lead'],
  changeReferral: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead'],
  changeContacts: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead'],
  triage: ['surgeon', 'clinical-lead'],
  measure: ['nurse', 'optometrist', 'surgeon', 'clinical-lead'],
  signLensPlan: ['surgeon', 'clinical-lead'],
  assessRisk: ['surgeon', 'clinical-lead'],
  signConsent: ['surgeon', 'clinical-lead'],
  signNote: ['surgeon', 'clinical-lead'],
  checkSafety: ['nurse', 'surgeon', 'clinical-lead'],
  explainStop: ['surgeon', 'clinical-lead'],
  runTheatre: ['coordinator', 'surgeon', 'clinical-lead'],
} as const satisfies Record<string, readonly RoleName[]>
export type PathwayAct = keyof typeof pathwayActs

export function may(actor: Actor, act: PathwayAct, siteId: string): boolean {
  return hasRoleAt(actor, siteId, ...pathwayActs[act])
}
