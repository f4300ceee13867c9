/** The words of messaging. One list each; the database checks, the contracts and the screens read these. */

export const plannedKinds = [
  'surgery.reminder', 'dayone.evening', 'dayone.morning', 'visit.reminder', 'visit.changed', 'visit.cancelled',
  'safety.day3', 'safety.day7', 'drops.change', 'missing.patient', 'alert.surgeon', 'alert.rung', 'letter.sent',
] as const
export type PlannedKind = typeof plannedKinds[number]

/** What is answered by itself to a text that a patient sent. */
export const answerKinds = ['answer.confirmed', 'answer.cannot-come', 'answer.worried', 'answer.which', 'answer.stopped', 'answer.started', 'answer.received'] as const
export type AnswerKind = typeof answerKinds[number]

export const messageKinds = [...plannedKinds, ...answerKinds] as const
export type MessageKind = typeof messageKinds[number]

/** `call` is a task for a person: nobody is left in silence because no text may be sent. */
export const channels = ['text', 'email', 'call'] as const
export type Channel = typeof channels[number]

export const audiences = ['patient', 'staff', 'referrer'] as const
export type Audience = typeof audiences[number]

/** English, Welsh, Polish, Arabic, Bengali, Punjabi (Gurmukhi), Urdu. */
export const languages = ['en', 'cy', 'pl', 'ar', 'bn', 'pa', 'ur'] as const
export type Language = typeof languages[number]

export const rightToLeftLanguages: readonly Language[] = ['ar', 'ur']

/** How one person can and wants to be reached. */
export interface ContactPreferences {
  preferred: Channel
  /** A number that may receive texts (confirmed, not reported as somebody else's). */
  hasMobile: boolean
  hasEmail: boolean
  /** The person sent STOP, or asked not to be texted. Cancels no care. */
  textsStopped: boolean
  wantsDropsReminders: boolean
}

/** What makes a queued message pointless before it leaves. */
export const withdrawals = ['moved', 'cancelled', 'closed', 'arrived', 'reviewed', 'escalated', 'discharged', 'changed', 'acknowledged'] as const
export type Withdrawal = typeof withdrawals[number]

/** Kinds that leave without a plan: an account's new password, what a person answers by hand, what became of a surgeon's answer to an alert, and a question to a referrer. */
export const unplannedKinds = ['account.reset', 'reply.hand', 'alert.answer', 'referral.question'] as const
/** Every kind that a message row may have. */
export const storedKinds = [...messageKinds, ...unplannedKinds] as const
export type StoredKind = typeof storedKinds[number]

/** What a message row may be sent by; a `call` is a task, not a message. */
export const messageChannels = ['text', 'email'] as const
export type MessageChannel = typeof messageChannels[number]

export const messageStates = ['queued', 'sending', 'sent', 'delivered', 'failed', 'expired', 'withdrawn', 'held'] as const
export type MessageState = typeof messageStates[number]
