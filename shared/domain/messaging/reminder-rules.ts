import type { Audience, AnswerKind, MessageKind, PlannedKind, Withdrawal } from '#shared/domain/messaging/vocabulary'
import { answerKinds } from '#shared/domain/messaging/vocabulary'
import type { WallTime } from '#shared/domain/messaging/quiet-hours'

/** When a message leaves, by the wall clock of the site. `until` is when its purpose has passed. */
export type Timing =
  | { by: 'days-before', days: readonly number[], at: WallTime, until: WallTime }
  | { by: 'days-after-surgery', day: number, at: WallTime, until: WallTime }
  | { by: 'that-day', at: WallTime, until: WallTime }
  | { by: 'minutes-after-note', minutes: number, notAfter: WallTime, until: WallTime }
  | { by: 'minutes-before-visit', minutes: number, notBefore: WallTime }
  | { by: 'minutes-after-visit', minutes: number, untilMinutes: number }
  | { by: 'at-once', untilHours?: number, untilStart?: true }

export interface ReminderRule {
  audience: Audience
  /** `preferred`: one, as the person wishes. `both`: text and e-mail. A missing one falls back to the other, then to a call. */
  route: 'preferred' | 'text' | 'both' | 'email'
  timing: Timing
  /** `kept`: 20:00 to 08:00. `from-seven`: ends at 07:00. `none`: day and night. */
  quiet: 'kept' | 'from-seven' | 'none'
  withdrawnWhen: readonly Withdrawal[]
  /** Sent only to those who asked for it; never becomes a call. */
  onlyIfWanted?: true
  /** Goes out even after STOP: the one confirmation of it, and the answer to somebody who is worried. */
  evenWhenStopped?: true
}

const answer: ReminderRule = { audience: 'patient', route: 'text', timing: { by: 'at-once', untilHours: 12 }, quiet: 'kept', withdrawnWhen: [] }

/** Starting values (common practice): a site's clinical lead may change them. */
export const reminderRules: Readonly<Record<MessageKind, ReminderRule>> = {
  'surgery.reminder': { audience: 'patient', route: 'preferred', timing: { by: 'days-before', days: [7, 1], at: '10:00', until: '18:00' }, quiet: 'kept', withdrawnWhen: ['moved', 'cancelled', 'closed'] },
  'dayone.evening': { audience: 'patient', route: 'text', timing: { by: 'minutes-after-note', minutes: 120, notAfter: '19:55', until: '20:00' }, quiet: 'kept', withdrawnWhen: ['moved', 'cancelled', 'closed'] },
  'dayone.morning': { audience: 'patient', route: 'text', timing: { by: 'minutes-before-visit', minutes: 90, notBefore: '07:00' }, quiet: 'from-seven', withdrawnWhen: ['arrived', 'moved', 'cancelled', 'closed'] },
  'visit.reminder': { audience: 'patient', route: 'preferred', timing: { by: 'days-before', days: [3, 1], at: '10:00', until: '18:00' }, quiet: 'kept', withdrawnWhen: ['moved', 'cancelled', 'arrived', 'closed'] },
  'visit.changed': { audience: 'patient', route: 'both', timing: { by: 'at-once', untilStart: true }, quiet: 'kept', withdrawnWhen: [] },
  'visit.cancelled': { audience: 'patient', route: 'both', timing: { by: 'at-once', untilStart: true }, quiet: 'kept', withdrawnWhen: [] },
  'safety.day3': { audience: 'patient', route: 'text', timing: { by: 'days-after-surgery', day: 3, at: '10:00', until: '20:00' }, quiet: 'kept', withdrawnWhen: ['reviewed', 'escalated', 'discharged', 'closed'] },
  'safety.day7': { audience: 'patient', route: 'text', timing: { by: 'days-after-surgery', day: 7, at: '10:00', until: '20:00' }, quiet: 'kept', withdrawnWhen: ['reviewed', 'escalated', 'discharged', 'closed'] },
  'drops.change': { audience: 'patient', route: 'text', timing: { by: 'that-day', at: '09:00', until: '20:00' }, quiet: 'kept', withdrawnWhen: ['changed', 'closed'], onlyIfWanted: true },
  'missing.patient': { audience: 'patient', route: 'text', timing: { by: 'minutes-after-visit', minutes: 20, untilMinutes: 120 }, quiet: 'kept', withdrawnWhen: ['arrived', 'closed'] },
  'alert.surgeon': { audience: 'staff', route: 'both', timing: { by: 'at-once', untilHours: 24 }, quiet: 'none', withdrawnWhen: ['acknowledged'] },
  'alert.rung': { audience: 'staff', route: 'both', timing: { by: 'at-once', untilHours: 24 }, quiet: 'none', withdrawnWhen: ['acknowledged'] },
  'letter.sent': { audience: 'referrer', route: 'email', timing: { by: 'at-once', untilHours: 168 }, quiet: 'none', withdrawnWhen: [] },
  'answer.confirmed': answer,
  'answer.cannot-come': answer,
  'answer.which': answer,
  'answer.started': answer,
  'answer.received': answer,
  'answer.stopped': { ...answer, evenWhenStopped: true },
  'answer.worried': { ...answer, timing: { by: 'at-once', untilHours: 1 }, quiet: 'none', evenWhenStopped: true },
}

export function isAnswerKind(kind: MessageKind): kind is AnswerKind {
  return (answerKinds as readonly string[]).includes(kind)
}

/** Whether an event makes queued messages of a kind pointless. */
export function isWithdrawnBy(kind: PlannedKind, event: Withdrawal): boolean {
  return reminderRules[kind].withdrawnWhen.includes(event)
}
