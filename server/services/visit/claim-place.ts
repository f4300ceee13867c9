import { and, asc, eq, isNull, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { clinicSessions, sessionPlaces, sites } from '#server/db/schema/index'
import { DomainError } from '#shared/domain/errors'

export interface ClaimablePlace { placeId: string, startsAt: Date, siteId: string, siteZone: string }

const taken = sql`exists (select 1 from visits v where v.place_id = ${sessionPlaces.id} and v.state not in ('cancelled', 'moved'))`

/** Locks one place: the named one, or the earliest free one of a session. The unique index still has the last word. */
export async function lockPlace(tx: Transaction, wanted: { placeId?: string, sessionId?: string }): Promise<ClaimablePlace> {
  const which = wanted.placeId ? eq(sessionPlaces.id, wanted.placeId) : and(eq(sessionPlaces.sessionId, wanted.sessionId ?? ''), isNull(sessionPlaces.closedAt), sql`not ${taken}`)
  const [place] = await tx.select({ placeId: sessionPlaces.id, startsAt: sessionPlaces.startsAt, siteId: clinicSessions.siteId, siteZone: sites.zone, placeClosedAt: sessionPlaces.closedAt, sessionClosedAt: clinicSessions.closedAt, taken: sql<boolean>`${taken}` })
    .from(sessionPlaces)
    .innerJoin(clinicSessions, eq(clinicSessions.id, sessionPlaces.sessionId))
    .innerJoin(sites, eq(sites.id, clinicSessions.siteId))
    .where(which)
    .orderBy(asc(sessionPlaces.startsAt), asc(sessionPlaces.id))
    .limit(1)
    .for('update', wanted.placeId ? { of: sessionPlaces } : { of: sessionPlaces, skipLocked: true })
  if (!place) {
    if (wanted.placeId) throw new DomainError('visit.place-not-found', 'There is no such place in a clinic.')
    throw new DomainError('visit.session-full', 'This session has no free place left. Nothing was booked.')
  }
  if (place.placeClosedAt || place.sessionClosedAt) throw new DomainError('visit.place-closed', 'This session or place is closed. Choose another.')
  if (place.taken) throw new DomainError('visit.place-taken', 'That place was just taken. Choose another.')
  return place
}
