import { createHash } from 'node:crypto'
import ical, { ICalCalendarMethod, ICalEventStatus } from 'ical-generator'
import type { sites, visits } from '#server/db/schema/index'

const minutesOfVisit = 30

interface CalendarInput { visit: typeof visits.$inferSelect, site: typeof sites.$inferSelect, cancelled: boolean, now: Date }

/**
 * A visit as an iCalendar file (RFC 5545). Neutral, for calendars are shared and shown on lock screens: when, where, whom to ring.
 * A moved visit keeps its UID and has a higher SEQUENCE, so that it replaces the entry that was there.
 */
export function visitCalendar({ visit, site, cancelled, now }: CalendarInput): string {
  const calendar = ical({ prodId: { company: 'Dawnward', product: 'Visits', language: 'EN' }, method: cancelled ? ICalCalendarMethod.CANCEL : ICalCalendarMethod.PUBLISH })
  calendar.createEvent({
    id: `${uidOf(visit)}@dawnward.example.org`,
    sequence: Math.floor(visit.bookedAt.getTime() / 1000) - 1_700_000_000 + (cancelled ? 1 : 0),
    stamp: now, start: visit.startsAt, end: new Date(visit.startsAt.getTime() + minutesOfVisit * 60_000),
    summary: 'Visit', location: `${site.name}, ${site.address}`, description: `To move it, ring ${site.phone}.`,
    status: cancelled ? ICalEventStatus.CANCELLED : ICalEventStatus.CONFIRMED,
  })
  return calendar.toString()
}

/** The same for every place that one visit of an eye is moved to; says nothing about what kind of visit it is. */
function uidOf(visit: CalendarInput['visit']): string {
  const about = visit.kind === 'unplanned' ? visit.id : `${visit.pathwayId}:${visit.kind}`
  return createHash('sha256').update(about).digest('hex').slice(0, 32)
}
