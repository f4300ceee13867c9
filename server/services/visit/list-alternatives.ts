import type { ServiceContext } from '#server/services/context'
import { listOpenPlaces } from '#server/services/visit/list-open-places'
import type { VisitKind } from '#shared/domain/review/vocabulary'

const mostShown = 3

/** The soonest free places of the same kind, for whoever was just beaten to one. */
export async function listAlternatives(ctx: ServiceContext, kind: VisitKind) {
  const free = await listOpenPlaces(ctx, { kind: kind === 'day-one' ? 'day-one' : 'follow-up', days: kind === 'day-one' ? 3 : 42 })
  return free.slice(0, mostShown).map(place => ({ placeId: place.id, startsAt: place.startsAt.toISOString(), room: place.room, siteName: place.siteName, zone: place.zone }))
}
