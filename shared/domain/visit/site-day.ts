import { Temporal } from 'temporal-polyfill'

/**
 * The instants between which one calendar day lies at a site.
 * @param zone IANA zone of the site; @param now any instant; @param date YYYY-MM-DD, today at the site when left out.
 * A day with a clock change is 23 or 25 hours long, and the answer says so.
 */
export function dayBounds(zone: string, now: Date, date?: string): { from: Date, to: Date, date: string } {
  const day = date ? Temporal.PlainDate.from(date) : Temporal.Instant.fromEpochMilliseconds(now.getTime()).toZonedDateTimeISO(zone).toPlainDate()
  const from = day.toZonedDateTime({ timeZone: zone, plainTime: '00:00' })
  const to = day.add({ days: 1 }).toZonedDateTime({ timeZone: zone, plainTime: '00:00' })
  return { from: new Date(from.epochMilliseconds), to: new Date(to.epochMilliseconds), date: day.toString() }
}

/** Whole calendar days at the site from surgery to `at`; surgery day is 0, the day before it -1. */
export function daysSince(zone: string, surgeryAt: Date, at: Date): number {
  const plain = (instant: Date) => Temporal.Instant.fromEpochMilliseconds(instant.getTime()).toZonedDateTimeISO(zone).toPlainDate()
  return plain(surgeryAt).until(plain(at), { largestUnit: 'days' }).days
}
