import { Temporal } from 'temporal-polyfill'

/** The instant of a wall clock at a site, as ISO text. A time that a clock change skips is read as the hour after; one that comes twice, as the first. `null` when it is no date or no time. */
export function instantAt(date: string | null, time: string, zone: string): string | null {
  if (!date || !/^([01]\d|2[0-3]):[0-5]\d$/.test(time)) return null
  return new Date(Temporal.PlainDateTime.from(`${date}T${time}`).toZonedDateTime(zone).epochMilliseconds).toISOString()
}

/** The calendar day so many days from another. */
export function addDays(date: string, days: number): string {
  return Temporal.PlainDate.from(date).add({ days }).toString()
}
