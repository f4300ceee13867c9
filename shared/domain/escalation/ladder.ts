import { Temporal } from 'temporal-polyfill'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

/** Rungs of the ladder, first to last. After the last it goes round again: nobody is let off by waiting. */
export const lastRung = 3

/** Minutes on each rung before the next is told. 'proposed': a site's clinical lead signs them before use. */
export const minutesPerRung: Record<Urgency, number> = { 'now': 5, 'today': 60, 'this-week': 24 * 60 }

const todayEnds = Temporal.PlainTime.from('17:00')
const workingDays = 5

/**
 * When an escalation must have its answer: `now` within the hour, `today` by 17:00 at the site (within two hours when raised
 * after 15:00), `this-week` by 17:00 of the fifth working day (Monday to Friday; bank holidays are not known here).
 * @param zone IANA zone of the site.
 */
export function answerBy(urgency: Urgency, raisedAt: Date, zone: string): Date {
  const raised = Temporal.Instant.fromEpochMilliseconds(raisedAt.getTime()).toZonedDateTimeISO(zone)
  if (urgency === 'now') return new Date(raised.add({ hours: 1 }).epochMilliseconds)
  if (urgency === 'today') {
    const evening = raised.withPlainTime(todayEnds)
    const soonest = raised.add({ hours: 2 })
    return new Date((Temporal.ZonedDateTime.compare(evening, soonest) > 0 ? evening : soonest).epochMilliseconds)
  }
  let day = raised
  for (let counted = 0; counted < workingDays;) {
    day = day.add({ days: 1 })
    if (day.dayOfWeek <= 5) counted++
  }
  return new Date(day.withPlainTime(todayEnds).epochMilliseconds)
}

/** When the next rung is told if nobody has acknowledged by then. A week's matter waits for working hours (08:00-18:00, Monday to Friday). */
export function nextRungAfter(urgency: Urgency, from: Date, zone: string): Date {
  let due = Temporal.Instant.fromEpochMilliseconds(from.getTime()).toZonedDateTimeISO(zone).add({ minutes: minutesPerRung[urgency] })
  if (urgency === 'this-week') {
    if (due.hour >= 18) due = due.add({ days: 1 }).withPlainTime('08:00')
    else if (due.hour < 8) due = due.withPlainTime('08:00')
    while (due.dayOfWeek > 5) due = due.add({ days: 1 }).withPlainTime('08:00')
  }
  return new Date(due.epochMilliseconds)
}
