import type { KnownFacts } from '#shared/domain/pathway/facts'
import type { CloseReason, PathwayState, Stage } from '#shared/domain/pathway/vocabulary'

export interface Requirement {
  id: string
  /** What is missing, in plain words, as it is shown when it is not met. */
  sentence: string
  isMet: (facts: KnownFacts) => boolean
}

/** What a move causes in the same transaction, beside the event and the audit row. */
export const pathwayEffects = [
  'cancelFutureVisits', 'withdrawMessages', 'closeEscalations', 'removeFromTheatreList', 'withdrawSafetyNet', 'stopMessagesToPatient',
] as const
export type PathwayEffect = typeof pathwayEffects[number]

export interface Transition {
  from: Stage
  to: Stage
  /** `advance` goes on with the pathway; `reopen` needs a reason. */
  by: 'advance' | 'reopen'
  requirements: readonly Requirement[]
  effects: readonly PathwayEffect[]
}

const none = (count: number | undefined) => count === 0

/** Every move between stages that exists. A pair that is not here cannot happen. */
export const transitions: readonly Transition[] = [
  {
    from: 'referral', to: 'biometry', by: 'advance', effects: [],
    requirements: [
      { id: 'triage-accepted', sentence: 'A surgeon has not accepted the referral, and their written criteria have not either.', isMet: facts => facts.triageAccepted === true },
      { id: 'eye-stated', sentence: 'The referral does not say which eye.', isMet: facts => facts.eyeStated === true },
      { id: 'contact-route', sentence: 'No way to reach the patient is recorded.', isMet: facts => facts.contactRouteRecorded === true },
      { id: 'message-consent', sentence: 'The patient has not been asked about texts and e-mails.', isMet: facts => facts.messageConsentRecorded === true },
      { id: 'red-flags', sentence: 'The red flags of the referral are not answered.', isMet: facts => facts.redFlagsAnswered === true },
    ],
  },
  {
    from: 'biometry', to: 'surgery', by: 'advance', effects: [],
    requirements: [
      { id: 'biometry-accepted', sentence: 'Biometry of this eye is not accepted.', isMet: facts => facts.biometryAccepted === true },
      { id: 'biometry-warnings', sentence: 'A biometry warning is neither repeated nor explained.', isMet: facts => none(facts.plausibilityWarningsOpen) },
      { id: 'lens-plan', sentence: 'The lens plan is not signed: model, power, target and predicted refraction.', isMet: facts => facts.lensPlanSigned === true },
      { id: 'second-check', sentence: 'The second check of the lens neither agrees nor is its difference explained.', isMet: facts => facts.secondCheckSettled === true },
      { id: 'risk', sentence: 'Risk is not assessed.', isMet: facts => facts.riskAssessed === true },
      { id: 'consent', sentence: 'Consent is not recorded.', isMet: facts => facts.consentRecorded === true },
      { id: 'theatre-list', sentence: 'The eye is not on a theatre list.', isMet: facts => facts.onTheatreList === true },
    ],
  },
  {
    from: 'surgery', to: 'day-one', by: 'advance', effects: [],
    requirements: [
      { id: 'operation-note', sentence: 'The operation note is not signed.', isMet: facts => facts.operationNoteSigned === true },
      { id: 'lens-implanted', sentence: 'The lens implanted is not the lens planned, and nobody has explained it.', isMet: facts => facts.lensAsPlanned === true || facts.lensDeviationExplained === true },
      { id: 'drops', sentence: 'Drops after surgery are not prescribed.', isMet: facts => facts.dropsPrescribed === true },
      { id: 'first-check', sentence: 'No day-one visit is booked, and no other first check is decided.', isMet: facts => facts.dayOneBooked === true || facts.otherFirstCheckDecided === true },
    ],
  },
  {
    from: 'day-one', to: 'follow-up', by: 'advance', effects: [],
    requirements: [
      { id: 'day-one-review', sentence: 'The day-one review is not signed.', isMet: facts => facts.dayOneReviewSigned === true || (facts.otherFirstCheckDecided === true && facts.otherFirstCheckRecorded === true) },
      { id: 'urgent-escalations', sentence: 'An escalation of urgency Now or Today is not acknowledged.', isMet: facts => none(facts.unacknowledgedUrgentEscalations) },
      { id: 'next-visit', sentence: 'The next visit is not booked.', isMet: facts => facts.nextVisitBooked === true },
    ],
  },
  {
    from: 'follow-up', to: 'discharge', by: 'advance', effects: ['withdrawSafetyNet'],
    requirements: [
      { id: 'final-refraction', sentence: 'The final refraction is not recorded.', isMet: facts => facts.finalRefractionRecorded === true },
      { id: 'final-acuity', sentence: 'The final vision is not recorded.', isMet: facts => facts.finalAcuityRecorded === true },
      { id: 'open-escalations', sentence: 'An escalation is still open.', isMet: facts => none(facts.openEscalations) },
      { id: 'fellow-eye', sentence: 'Nothing is decided about the fellow eye.', isMet: facts => facts.fellowEyeDecisionRecorded === true },
      { id: 'discharge-letter', sentence: 'The discharge letter has not gone to the referrer.', isMet: facts => facts.dischargeLetterSent === true },
    ],
  },
  {
    from: 'discharge', to: 'follow-up', by: 'reopen', effects: [],
    requirements: [
      { id: 'only-open-pathway', sentence: 'Another pathway of this eye is open.', isMet: facts => facts.otherOpenPathwayOfEye === false },
    ],
  },
]

export const pathwayActionKinds = ['advance', 'hold', 'release', 'close', 'reopen'] as const
export type PathwayActionKind = typeof pathwayActionKinds[number]

/**
 * In which states and at which stages each action may be taken. A held pathway can be held anew (another reason or date),
 * released or closed, and moves in no other way. A closed one has no way back: a new referral starts a new pathway.
 */
export const actionRules: Readonly<Record<PathwayActionKind, { states: readonly PathwayState[], stages: readonly Stage[] }>> = {
  advance: { states: ['open'], stages: transitions.filter(each => each.by === 'advance').map(each => each.from) },
  hold: { states: ['open', 'held'], stages: ['referral', 'biometry', 'surgery', 'day-one', 'follow-up'] },
  release: { states: ['held'], stages: ['referral', 'biometry', 'surgery', 'day-one', 'follow-up'] },
  close: { states: ['open', 'held'], stages: ['referral', 'biometry', 'surgery', 'day-one', 'follow-up', 'discharge'] },
  reopen: { states: ['open'], stages: transitions.filter(each => each.by === 'reopen').map(each => each.from) },
}

const leaving: readonly PathwayEffect[] = ['cancelFutureVisits', 'withdrawMessages', 'closeEscalations', 'removeFromTheatreList']

/** What closing causes, by its reason. After a death the patient is sent nothing about the other eye either. */
export const closingEffects: Readonly<Record<CloseReason, readonly PathwayEffect[]>> = {
  'declined': leaving,
  'not-suitable': leaving,
  'moved-away': leaving,
  'died': [...leaving, 'stopMessagesToPatient'],
  'entered-in-error': leaving,
}
