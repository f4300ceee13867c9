import { and, eq, inArray, ne, or } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { sites, visits } from '#server/db/schema/index'
import { liveVisitStates } from '#shared/domain/visit/vocabulary'
import type { BookingNeed, SiteDistances } from '#shared/domain/visit/booking-constraints'
import type { DayOneNeed } from '#shared/domain/visit/day-one-need'

/** The need as the operation note left it with the pathway: instants are text in there. */
export type StoredNeed = Partial<Omit<DayOneNeed, 'latestSafeAt'>> & { inPerson?: boolean, latestSafeAt?: string | null }
export interface NeedRow { id: string, patientId: string, siteId: string, operatedAt: Date | null, dayOneNeed: Record<string, unknown> | null, needsTransport: boolean, interpreterLanguage: string | null }

const dayMs = 86_400_000

/** What a place must satisfy for this eye. A pathway without a recorded need counts as required within a day: missing data is never "no need". */
export function bookingNeedOf(row: NeedRow, now: Date, fellowVisit?: { siteId: string, startsAt: Date }): BookingNeed {
  const need = (row.dayOneNeed ?? {}) as StoredNeed
  const operatedAt = row.operatedAt ?? now
  const isRequired = need.isRequired ?? need.inPerson ?? true
  const latest = need.latestSafeAt ? new Date(need.latestSafeAt) : new Date(operatedAt.getTime() + (isRequired ? 1 : 2) * dayMs)
  return {
    pathwayId: row.id, patientId: row.patientId, siteId: row.siteId, isRequired, latestSafeAt: latest, because: need.reasons?.map(each => each.sentence).join(' ') || undefined,
    inPerson: need.constraints?.inPerson ?? isRequired, atHospital: need.constraints?.atHospital ?? false, beforeNoon: need.constraints?.beforeNoon ?? false,
    transport: row.needsTransport ? 'to-arrange' : undefined, interpreter: row.interpreterLanguage ? { language: row.interpreterLanguage } : undefined,
    fellowVisit: need.constraints?.fellowEyeSameDay ? fellowVisit : undefined,
  }
}

/** Minutes of travel between sites, as each site's settings give them; a pair that nobody entered is not known. */
export async function loadDistances(db: Queryable): Promise<SiteDistances> {
  const rows = await db.select({ id: sites.id, settings: sites.settings }).from(sites)
  return Object.fromEntries(rows.map(({ id, settings }) => [id, Object.fromEntries(Object.entries((settings.travelMinutes ?? {}) as Record<string, unknown>).filter((pair): pair is [string, number] => typeof pair[1] === 'number'))]))
}

/** The booked day-one visits of other eyes of these patients. */
export async function loadFellowVisits(db: Queryable, rows: readonly { id: string, patientId: string }[]) {
  if (!rows.length) return []
  return db.select({ patientId: visits.patientId, pathwayId: visits.pathwayId, siteId: visits.siteId, startsAt: visits.startsAt }).from(visits)
    .where(and(eq(visits.kind, 'day-one'), inArray(visits.state, [...liveVisitStates]), or(...rows.map(row => and(eq(visits.patientId, row.patientId), ne(visits.pathwayId, row.id))))))
}
