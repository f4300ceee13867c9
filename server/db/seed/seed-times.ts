import { dayBounds } from '#shared/domain/visit/site-day'

const minuteMs = 60_000
const hourMs = 60 * minuteMs
const dayMs = 24 * hourMs
const zone = 'Europe/London'

export interface ScenarioTimes { today: Date, now: Date }

/** Midnight UTC of the site's own date: the seed places other days by whole days and hours from it. */
export function seededDay(now: Date): Date {
  return new Date(`${dayBounds(zone, now).date}T00:00:00Z`)
}

/**
 * An instant of the seeded morning, so many minutes after the moment of seeding (before it when negative), on a round five minutes. What
 * would fall on another day at the site is drawn to the first or last minute of this one, so that the clinic is whole at any hour.
 */
export function aroundNow({ now }: ScenarioTimes, minutes: number): Date {
  const { from, to } = dayBounds(zone, now)
  const round = Math.floor(now.getTime() / (5 * minuteMs)) * 5 * minuteMs
  return new Date(Math.min(Math.max(round + minutes * minuteMs, from.getTime()), to.getTime() - minuteMs))
}

/** When the eyes that still wait for a place were operated: yesterday afternoon, or late enough that a check within 24 hours is still ahead. */
export function lateList({ today, now }: ScenarioTimes, minutes: number): Date {
  return new Date(Math.max(today.getTime() - dayMs + 15 * hourMs, now.getTime() - 20 * hourMs) + minutes * minuteMs)
}
