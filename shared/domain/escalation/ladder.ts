import { Temporal } from 'temporal-polyfill'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

/** Rungs of the ladder, first to last. After the last it goes round again: nobody is let off by waiting. */
export const lastRung = 3

/** How long each rung has before the next is told. 'proposed': a site's clinical lead signs them before use. */
export const rungWaits: Readonly<Record<Urgency, { minutes: number } | { workingDays: number }>> = { 'now': { minutes: 5 }, 'today': { minutes: 60 }, 'this-week': { workingDays: 1 } }

const todayEnds = Temporal.PlainTime.from('17:00')
const dayStarts = Temporal.PlainTime.from('08:00')
const dayEndsHour = 18
const workingDaysToAnswer = 5
const fridayOfWeek = 5

const at = (instant: Date, zone: string) => Temporal.Instant.fromEpochMilliseconds(instant.getTime()).toZonedDateTimeISO(zone)
const dateOf = (moment: Temporal.ZonedDateTime) => new Date(moment.epochMilliseconds)

/** The same wall-clock time so many working days later. Monday to Friday; bank holidays are not known here. */
function addWorkingDays(from: Temporal.ZonedDateTime, days: number): Temporal.ZonedDateTime {
  let day = from
  for (let counted = 0; counted < days;) {
    day = day.add({ days: 1 })
    if (day.dayOfWeek <= fridayOfWeek) counted++
  }
  return day
}

/** The moment itself in working hours (Monday to Friday, 08:00 to 18:00), else when they next begin. */
function inWorkingHours(moment: Temporal.ZonedDateTime): Temporal.ZonedDateTime {
  if (moment.dayOfWeek > fridayOfWeek || moment.hour >= dayEndsHour) return addWorkingDays(moment, 1).withPlainTime(dayStarts)
  return Temporal.PlainTime.compare(moment.toPlainTime(), dayStarts) < 0 ? moment.withPlainTime(dayStarts) : moment
}

/**
 * When an escalation must have its answer: `now` within the hour, `today` by 17:00 at the site (within two hours when raised
 * after 15:00), `this-week` by 17:00 of the fifth working day.
 * @param zone IANA zone of the site.
 */
export function answerBy(urgency: Urgency, raisedAt: Date, zone: string): Date {
  const raised = at(raisedAt, zone)
  if (urgency === 'now') return dateOf(raised.add({ hours: 1 }))
  if (urgency === 'this-week') return dateOf(addWorkingDays(raised, workingDaysToAnswer).withPlainTime(todayEnds))
  const evening = raised.withPlainTime(todayEnds)
  const soonest = raised.add({ hours: 2 })
  return dateOf(Temporal.ZonedDateTime.compare(evening, soonest) > 0 ? evening : soonest)
}

/** When the next rung is told if nobody has acknowledged by then. `now` and `today` climb day and night; a week's matter waits for working hours. */
export function nextRungAfter(urgency: Urgency, from: Date, zone: string): Date {
  const wait = rungWaits[urgency]
  if ('minutes' in wait) return new Date(from.getTime() + wait.minutes * 60_000)
  return dateOf(addWorkingDays(inWorkingHours(at(from, zone)), wait.workingDays))
}

/** One person's time on one rung of a site's rota, from `startsAt` until just before `endsAt`. */
export interface Shift { rung: number, personId: string, startsAt: Date, endsAt: Date }

export interface RungStep {
  rung: number
  /** When this rung is told while nobody has acknowledged. */
  at: Date
  /** Null when nobody stands on the rung then: the clinical lead is told in their place. */
  personId: string | null
}

/** The first round of the ladder of an escalation that nobody answers: the first rung at once, each further one after its wait. */
export function rungSchedule(urgency: Urgency, raisedAt: Date, zone: string, shifts: readonly Shift[]): RungStep[] {
  const steps: RungStep[] = []
  let due = raisedAt
  for (let rung = 1; rung <= lastRung; rung++) {
    if (rung > 1) due = nextRungAfter(urgency, due, zone)
    const told = due
    const shift = shifts.find(each => each.rung === rung && each.startsAt <= told && each.endsAt > told)
    steps.push({ rung, at: told, personId: shift?.personId ?? null })
  }
  return steps
}
