import type { CloseReason, Stage } from '#shared/domain/pathway/vocabulary'

export const stageLabels: Record<Stage, string> = { 'referral': 'Referral', 'biometry': 'Biometry', 'surgery': 'Surgery', 'day-one': 'Day one', 'follow-up': 'Follow-up', 'discharge': 'Discharge' }
export const closeLabels: Record<CloseReason, string> = { 'declined': 'Declined', 'not-suitable': 'Not suitable', 'moved-away': 'Moved away', 'died': 'Died', 'entered-in-error': 'Entered in error' }

/** The place where each requirement of a move is met, as an address of the pathway's own pages. */
export function placeOf(requirement: string, pathwayId: string): string | undefined {
  const own = `/pathways/${pathwayId}`
  return ({
    'triage-accepted': `${own}#referral`, 'eye-stated': `${own}#referral`, 'red-flags': `${own}#referral`,
    'contact-route': `${own}#contacts`, 'message-consent': `${own}#contacts`,
    'biometry-accepted': `${own}/biometry`, 'biometry-warnings': `${own}/biometry`,
    'lens-plan': `${own}/lens-plan`, 'second-check': `${own}/lens-plan`,
    'risk': `${own}/prepare`, 'consent': `${own}/prepare#consent`,
    'theatre-list': '/theatre',
    'operation-note': `${own}/note`, 'lens-implanted': `${own}/note`, 'drops': `${own}/note`,
    'first-check': `${own}#first-check`, 'day-one-review': `${own}#visits`, 'urgent-escalations': '/escalations', 'next-visit': `/clinic?kind=follow-up&pathway=${pathwayId}`,
    'final-refraction': `${own}#visits`, 'final-acuity': `${own}#visits`, 'open-escalations': '/escalations', 'fellow-eye': `${own}#fellow-eye`, 'discharge-letter': `${own}#letter`,
  } as Record<string, string>)[requirement]
}
