import { Temporal } from 'temporal-polyfill'

/** Wall-clock time at a site, HH:mm. */
export type WallTime = `${number}:${number}`

/** Patients are left in peace from 20:00 until 08:00, site's time (common practice). */
export const quietFrom: WallTime = '20:00'
export const quietUntil: WallTime = '08:00'

export function inZone(instant: Date, siteZone: string): Temporal.ZonedDateTime {
  return Temporal.Instant.fromEpochMilliseconds(instant.getTime()).toZonedDateTimeISO(siteZone)
}

export function toDate(moment: Temporal.ZonedDateTime | Temporal.Instant): Date {
  return new Date(moment.epochMilliseconds)
}

/**
 * The instant at which a site's clock shows a date and time. When clocks go forward and the time does not exist,
 * the moment as long after the gap as the time was after its start; when clocks go back and it exists twice, the
 * first, unless `notBefore` has passed it, then the second.
 */
export function atWallTime(date: Temporal.PlainDate, time: WallTime, siteZone: string, notBefore?: Temporal.ZonedDateTime): Temporal.ZonedDateTime {
  const wall = date.toPlainDateTime(Temporal.PlainTime.from(time))
  const first = wall.toZonedDateTime(siteZone, { disambiguation: 'compatible' })
  const passed = notBefore !== undefined && Temporal.ZonedDateTime.compare(first, notBefore) < 0
  return passed ? wall.toZonedDateTime(siteZone, { disambiguation: 'later' }) : first
}

/** Whether a clock showing this moment is inside quiet hours. `until` moves their end, for the day-one morning text. */
export function isQuiet(instant: Date, siteZone: string, until: WallTime = quietUntil): boolean {
  return isQuietMoment(inZone(instant, siteZone), until)
}

function isQuietMoment(moment: Temporal.ZonedDateTime, until: WallTime): boolean {
  const time = moment.toPlainTime()
  return Temporal.PlainTime.compare(time, Temporal.PlainTime.from(quietFrom)) >= 0 || Temporal.PlainTime.compare(time, Temporal.PlainTime.from(until)) < 0
}

/**
 * The moment itself when a clock there shows one outside quiet hours, else the next end of quiet hours. Where clocks
 * go back over that end, the one still to come.
 */
export function nextAllowed(instant: Date, siteZone: string, until: WallTime = quietUntil): Date {
  const moment = inZone(instant, siteZone)
  if (!isQuietMoment(moment, until)) return instant
  const evening = Temporal.PlainTime.compare(moment.toPlainTime(), Temporal.PlainTime.from(quietFrom)) >= 0
  return toDate(atWallTime(moment.toPlainDate().add({ days: evening ? 1 : 0 }), until, siteZone, moment))
}
