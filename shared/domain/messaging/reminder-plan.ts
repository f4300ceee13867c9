import { Temporal } from 'temporal-polyfill'
import { atWallTime, inZone, isQuiet, nextAllowed, quietUntil, toDate } from '#shared/domain/messaging/quiet-hours'
import type { WallTime } from '#shared/domain/messaging/quiet-hours'
import { reminderRules } from '#shared/domain/messaging/reminder-rules'
import type { ReminderRule, Timing } from '#shared/domain/messaging/reminder-rules'
import type { AnswerKind, Channel, ContactPreferences, MessageKind } from '#shared/domain/messaging/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import type { VisitKind } from '#shared/domain/review/vocabulary'

/** What happened or stands in the book, and so causes messages. Dates (`YYYY-MM-DD`) are the site's calendar. */
export type Occasion =
  | { kind: 'surgery', startsAt: Date }
  | { kind: 'visit', visitKind: VisitKind, startsAt: Date }
  | { kind: 'note-signed', surgeryDate: string, signedAt: Date }
  | { kind: 'surgery-done', surgeryDate: string }
  /** `version` counts the moves of a visit, so that moving it back and forth is told each time. */
  | { kind: 'visit-changed', startsAt: Date, version: number }
  | { kind: 'visit-cancelled', startsAt: Date, version: number }
  | { kind: 'visit-missing', startsAt: Date }
  | { kind: 'drops-change', dates: readonly string[] }
  /** Rung 0 is the first person told. A risen urgency is told again. */
  | { kind: 'alert', rung: number, urgency: Urgency }
  | { kind: 'letter', version: number }
  | { kind: 'answer', answer: AnswerKind, inboundId: string }

export interface PlannedMessage {
  kind: MessageKind
  /** With person, kind and subject it names this message once and for all: a moved visit has new occasions. */
  occasion: string
  dueAt: Date
  /** From here on it is never sent; it shows as expired. */
  expiresAt: Date
  channel: Channel
  /** Two messages with the same topic say the same thing. */
  topic: string
}

export interface SkippedMessage { kind: MessageKind, occasion: string, why: 'past' | 'not-wanted' | 'quiet-until-past' }

export interface MessagePlan { planned: PlannedMessage[], skipped: SkippedMessage[] }

interface PlanInput { occasion: Occasion, siteZone: string, preferences: ContactPreferences, now: Date }

/** One message before quiet hours, channels and the past are looked at. */
interface Wish { kind: MessageKind, occasion: string, topic: string, dueAt: Date, expiresAt: Date }

/**
 * The messages an occasion causes, by the wall clock of the site. What has passed its purpose is not planned late:
 * `explainPlan` names it. Times are whole instants; every one for a patient is outside quiet hours but for the two
 * stated exceptions (the day-one morning text from 07:00, the answer to somebody who is worried).
 */
export function planMessages(input: PlanInput): PlannedMessage[] {
  return explainPlan(input).planned
}

/** As `planMessages`, with what is not planned and why. */
export function explainPlan(input: PlanInput): MessagePlan {
  const plan: MessagePlan = { planned: [], skipped: [] }
  for (const wish of wishes(input)) settle(wish, input, plan)
  return plan
}

function settle(wish: Wish, { siteZone, preferences, now }: PlanInput, plan: MessagePlan): void {
  const { kind, occasion, topic, expiresAt } = wish
  const rule = reminderRules[kind]
  const skip = (why: SkippedMessage['why']) => void plan.skipped.push({ kind, occasion, why })
  if (rule.onlyIfWanted && !preferences.wantsDropsReminders) return skip('not-wanted')
  if (now >= expiresAt) return skip('past')
  const wanted = wish.dueAt > now ? wish.dueAt : now
  const dueAt = rule.quiet === 'none' ? wanted : nextAllowed(wanted, siteZone, quietEnd(rule))
  const routes = channelsFor(rule, preferences)
  if (dueAt >= expiresAt) {
    // Nothing may be sent before it is too late. A changed or cancelled visit still has to reach the person: somebody rings.
    if (rule.timing.by !== 'at-once' || !rule.timing.untilStart) return skip('quiet-until-past')
    plan.planned.push({ kind, occasion: `${occasion} by call`, topic, dueAt: now, expiresAt, channel: 'call' })
    return
  }
  if (routes.length === 0) return skip('not-wanted')
  for (const channel of routes) {
    plan.planned.push({ kind, occasion: rule.route === 'both' ? `${occasion} by ${channel}` : occasion, topic, dueAt, expiresAt, channel })
  }
}

function quietEnd(rule: ReminderRule): WallTime {
  return rule.quiet === 'from-seven' ? '07:00' : quietUntil
}

/** Whether a message of this kind may leave at this moment. Asked again when it is claimed, for it may have waited. */
export function mayLeaveAt(kind: MessageKind, instant: Date, siteZone: string): boolean {
  const rule = reminderRules[kind]
  return rule.quiet === 'none' || !isQuiet(instant, siteZone, quietEnd(rule))
}

/** The ways a message of a rule takes to a person; `call` when no other is open. */
export function channelsFor(rule: ReminderRule, preferences: ContactPreferences): Channel[] {
  const text = preferences.hasMobile && (!preferences.textsStopped || rule.evenWhenStopped === true)
  const nobodyReached: Channel[] = rule.onlyIfWanted ? [] : ['call']
  if (rule.route === 'email') return preferences.hasEmail ? ['email'] : nobodyReached
  if (rule.audience === 'patient' && preferences.preferred === 'call' && !rule.evenWhenStopped) return nobodyReached
  const open: Channel[] = [...(text ? ['text' as const] : []), ...(preferences.hasEmail ? ['email' as const] : [])]
  if (open.length === 0) return nobodyReached
  if (rule.route === 'both') return open
  return rule.route === 'preferred' && preferences.preferred === 'email' && preferences.hasEmail ? ['email'] : open.slice(0, 1)
}

function wishes({ occasion, siteZone, now }: PlanInput): Wish[] {
  switch (occasion.kind) {
    case 'surgery': return before('surgery.reminder', occasion.startsAt, siteZone)
    case 'visit': return occasion.visitKind === 'day-one' ? shortlyBefore('dayone.morning', occasion.startsAt, siteZone) : before('visit.reminder', occasion.startsAt, siteZone)
    case 'note-signed': return eveningAfter('dayone.evening', occasion.surgeryDate, occasion.signedAt, siteZone)
    case 'surgery-done': return (['safety.day3', 'safety.day7'] as const).flatMap(kind => daysAfter(kind, occasion.surgeryDate, siteZone))
    case 'drops-change': return occasion.dates.flatMap(date => onDay('drops.change', Temporal.PlainDate.from(date), `step ${date}`, `drops ${date}`, siteZone))
    case 'visit-missing': return lateFor('missing.patient', occasion.startsAt, siteZone)
    case 'visit-changed': return [atOnce('visit.changed', `change ${occasion.version} to ${wallOf(occasion.startsAt, siteZone)}`, visitTopic(occasion.startsAt, siteZone), now, occasion.startsAt)]
    case 'visit-cancelled': return [atOnce('visit.cancelled', `change ${occasion.version}`, `cancelled ${wallOf(occasion.startsAt, siteZone)}`, now, occasion.startsAt)]
    case 'alert': return [atOnce(occasion.rung === 0 ? 'alert.surgeon' : 'alert.rung', `rung ${occasion.rung} ${occasion.urgency}`, `alert ${occasion.rung} ${occasion.urgency}`, now)]
    case 'letter': return [atOnce('letter.sent', `version ${occasion.version}`, `letter ${occasion.version}`, now)]
    case 'answer': return [atOnce(occasion.answer, `to ${occasion.inboundId}`, `${occasion.answer} ${occasion.inboundId}`, now)]
  }
}

function wallOf(instant: Date, siteZone: string): string {
  return inZone(instant, siteZone).toPlainDateTime().toString({ smallestUnit: 'minute' })
}

function visitTopic(startsAt: Date, siteZone: string): string {
  return `visit ${wallOf(startsAt, siteZone)}`
}

function timingOf<By extends Timing['by']>(kind: MessageKind, by: By): Extract<Timing, { by: By }> {
  const { timing } = reminderRules[kind]
  if (timing.by !== by) throw new TypeError(`${kind} is not timed ${by}`)
  return timing as Extract<Timing, { by: By }>
}

function before(kind: MessageKind, startsAt: Date, siteZone: string): Wish[] {
  const { days, at, until } = timingOf(kind, 'days-before')
  const date = inZone(startsAt, siteZone).toPlainDate()
  const topic = kind === 'visit.reminder' ? visitTopic(startsAt, siteZone) : `surgery ${wallOf(startsAt, siteZone)}`
  return days.map((count) => {
    const day = date.subtract({ days: count })
    const expiresAt = toDate(atWallTime(day, until, siteZone))
    return { kind, topic, occasion: `${count} ${count === 1 ? 'day' : 'days'} before ${wallOf(startsAt, siteZone)}`, dueAt: toDate(atWallTime(day, at, siteZone)), expiresAt: expiresAt < startsAt ? expiresAt : startsAt }
  })
}

function onDay(kind: MessageKind, date: Temporal.PlainDate, occasion: string, topic: string, siteZone: string): Wish[] {
  const { timing } = reminderRules[kind]
  if (timing.by !== 'that-day' && timing.by !== 'days-after-surgery') throw new TypeError(`${kind} is not timed by a day`)
  return [{ kind, occasion, topic, dueAt: toDate(atWallTime(date, timing.at, siteZone)), expiresAt: toDate(atWallTime(date, timing.until, siteZone)) }]
}

function daysAfter(kind: 'safety.day3' | 'safety.day7', surgeryDate: string, siteZone: string): Wish[] {
  const date = Temporal.PlainDate.from(surgeryDate).add({ days: timingOf(kind, 'days-after-surgery').day })
  return onDay(kind, date, `after ${surgeryDate}`, `symptom check ${date.toString()}`, siteZone)
}

function eveningAfter(kind: 'dayone.evening', surgeryDate: string, signedAt: Date, siteZone: string): Wish[] {
  const { minutes, notAfter, until } = timingOf(kind, 'minutes-after-note')
  const day = Temporal.PlainDate.from(surgeryDate)
  const latest = toDate(atWallTime(day, notAfter, siteZone))
  const wanted = new Date(signedAt.getTime() + minutes * 60_000)
  return [{ kind, occasion: `evening of ${surgeryDate}`, topic: `evening ${surgeryDate}`, dueAt: wanted < latest ? wanted : latest, expiresAt: toDate(atWallTime(day, until, siteZone)) }]
}

function shortlyBefore(kind: 'dayone.morning', startsAt: Date, siteZone: string): Wish[] {
  const { minutes, notBefore } = timingOf(kind, 'minutes-before-visit')
  const earliest = toDate(atWallTime(inZone(startsAt, siteZone).toPlainDate(), notBefore, siteZone))
  const wanted = new Date(startsAt.getTime() - minutes * 60_000)
  return [{ kind, occasion: `morning of ${wallOf(startsAt, siteZone)}`, topic: visitTopic(startsAt, siteZone), dueAt: wanted > earliest ? wanted : earliest, expiresAt: startsAt }]
}

function lateFor(kind: 'missing.patient', startsAt: Date, siteZone: string): Wish[] {
  const { minutes, untilMinutes } = timingOf(kind, 'minutes-after-visit')
  const after = (count: number) => new Date(startsAt.getTime() + count * 60_000)
  return [{ kind, occasion: `late for ${wallOf(startsAt, siteZone)}`, topic: `late ${wallOf(startsAt, siteZone)}`, dueAt: after(minutes), expiresAt: after(untilMinutes) }]
}

function atOnce(kind: MessageKind, occasion: string, topic: string, now: Date, startsAt?: Date): Wish {
  const { untilHours, untilStart } = timingOf(kind, 'at-once')
  const expiresAt = untilStart && startsAt ? startsAt : new Date(now.getTime() + (untilHours ?? 0) * 3_600_000)
  return { kind, occasion, topic, dueAt: now, expiresAt }
}
