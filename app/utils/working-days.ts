import { Temporal } from 'temporal-polyfill'

const fridayOfWeek = 5

/** Working days (Monday to Friday) after the day of `from`, up to and with the day of `to`, at a site. */
export function workingDaysBetween(from: string, to: string, zone: string): number {
  const dayOf = (instant: string) => Temporal.Instant.from(instant).toZonedDateTimeISO(zone).toPlainDate()
  const last = dayOf(to)
  let days = 0
  for (let day = dayOf(from).add({ days: 1 }); Temporal.PlainDate.compare(day, last) <= 0; day = day.add({ days: 1 })) if (day.dayOfWeek <= fridayOfWeek) days++
  return days
}
