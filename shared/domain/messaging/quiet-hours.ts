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
  if (!notBefore || Temporal.ZonedDateTime.compare(first, notBefore) >= 0) return first
  const second = wall.toZonedDateTime(siteZone, { disambiguation: 'later' })
  return Temporal.ZonedDateTime.compare(second, notBefore) >= 0 ? second : first
}

/** Whether a clock showing this moment is inside quiet hours. `until` moves their end, for the day-one morning text. */
export function isQuiet(instant: Date, siteZone: string, until: WallTime = quietUntil): boolean {
  return isQuietMoment(inZone(instant, siteZone), until)
}

function isQuietMoment(moment: Temporal.ZonedDateTime, until: WallTime): boolean {
  const time = moment.toPlainTime()
  return Temporal.PlainTime.compare(time, Temporal.PlainTime.from(quietFrom)) >= 0 || Temporal.PlainTime.compare(time, Temporal.PlainTime.from(until)) < 0
}

/** The first moment at or after `instant` that is outside quiet hours. */
export function nextAllowed(instant: Date, siteZone: string, until: WallTime = quietUntil): Date {
  const moment = inZone(instant, siteZone)
  if (!isQuietMoment(moment, until)) return instant
  const evening = Temporal.PlainTime.compare(moment.toPlainTime(), Temporal.PlainTime.from(quietFrom)) >= 0
  let date = evening ? moment.toPlainDate().add({ days: 1 }) : moment.toPlainDate()
  let morning = atWallTime(date, until, siteZone, moment)
  // A zone that skipped a calendar day, or turned its clocks back across the evening, needs one more step.
  while (Temporal.ZonedDateTime.compare(morning, moment) < 0 || isQuietMoment(morning, until)) {
    date = date.add({ days: 1 })
    morning = atWallTime(date, until, siteZone, moment)
  }
  return toDate(morning)
}
