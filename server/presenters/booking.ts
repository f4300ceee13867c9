import { mayReview } from '#server/policies/review'
import { mayBook, mayRunSessions } from '#server/policies/visit'
import type { listSharedVisits } from '#server/services/visit/list-shared-visits'
import type { proposeList } from '#server/services/visit/propose-list'
import type { StoredNeed } from '#server/services/visit/booking-need'
import type { clinicSessions } from '#server/db/schema/index'
import type { Actor } from '#shared/domain/people/vocabulary'

/** What an eye's first check needs, in the words of the site's table. */
export function presentNeed(stored: Record<string, unknown> | null) {
  const need = (stored ?? {}) as StoredNeed
  return {
    isRequired: need.isRequired ?? need.inPerson ?? true,
    inPerson: need.inPerson ?? need.isRequired ?? true,
    reasons: need.reasons?.map(each => ({ sentence: each.sentence, source: each.source })) ?? [],
    unknown: need.unknown ?? [],
    latestSafeAt: need.latestSafeAt ?? null,
    constraints: { atHospital: need.constraints?.atHospital ?? false, beforeNoon: need.constraints?.beforeNoon ?? false, fellowEyeSameDay: need.constraints?.fellowEyeSameDay ?? false },
  }
}
export type FirstCheckNeed = ReturnType<typeof presentNeed>

export function presentProposal({ rows, needs, places, plan, now, siteDistances }: Awaited<ReturnType<typeof proposeList>>, actor: Actor) {
  const shown = (placeId: string) => {
    const place = places.find(each => each.id === placeId)
    return place ? { id: place.id, startsAt: place.startsAt.toISOString(), minutes: place.minutes, room: place.room, siteName: place.siteName, siteId: place.siteId } : null
  }
  return {
    now: now.toISOString(), siteDistances, openPlaces: places.length, sites: new Set(places.map(place => place.siteId)).size,
    rows: rows.map((row, index) => {
      const proposed = plan.proposals.find(each => each.pathwayId === row.id)
      const unplaced = plan.unplaced.find(each => each.pathwayId === row.id)
      const need = needs[index]
      return {
        pathwayId: row.id, eye: row.eye, patient: { id: row.patient.id, name: row.patient.name }, siteId: row.siteId, siteName: row.siteName, zone: row.zone, operatedAt: row.operatedAt?.toISOString() ?? null, alerts: row.patient.alerts.map(alert => alert.words),
        need: { ...presentNeed(row.dayOneNeed), latestSafeAt: need?.latestSafeAt.toISOString() ?? null },
        needsTransport: row.patient.needsTransport, interpreterLanguage: row.patient.interpreterLanguage,
        fellowVisit: need?.fellowVisit ? { siteId: need.fellowVisit.siteId, startsAt: need.fellowVisit.startsAt.toISOString() } : null,
        place: proposed ? shown(proposed.placeId) : null,
        why: proposed?.why ?? unplaced?.why ?? '',
        others: (proposed?.otherPlaceIds ?? []).map(shown).filter(place => place !== null),
        waysOut: unplaced?.waysOut ?? [],
        canBook: mayBook(actor, row.siteId),
        canOpenPlaces: mayRunSessions(actor, row.siteId),
      }
    }),
  }
}
export type Proposal = ReturnType<typeof presentProposal>

export function presentSession(session: typeof clinicSessions.$inferSelect) {
  return { id: session.id, siteId: session.siteId, kind: session.kind, room: session.room, startsAt: session.startsAt.toISOString(), endsAt: session.endsAt.toISOString(), closed: session.closedAt !== null, rowVersion: session.rowVersion }
}

export function presentShared({ eyes, visits, last }: Awaited<ReturnType<typeof listSharedVisits>>, actor: Actor) {
  return {
    items: eyes.map((row) => {
      const reviewed = last.find(each => each.pathwayId === row.id)
      return {
        pathwayId: row.id, eye: row.eye, stage: row.stage, operatedAt: row.operatedAt?.toISOString() ?? null, zone: row.zone, siteName: row.siteName, sitePhone: row.sitePhone, patient: { id: row.patient.id, name: row.patient.name, phone: row.patient.phone, alerts: row.patient.alerts.map(alert => alert.words) },
        visits: visits.filter(visit => visit.pathwayId === row.id).map(visit => ({ id: visit.id, kind: visit.kind, state: visit.state, startsAt: visit.startsAt.toISOString(), siteName: visit.siteName })),
        last: reviewed ? { visitId: reviewed.visitId, signedAt: reviewed.signedAt.toISOString() } : null,
        canReview: mayReview(actor, row),
      }
    }),
  }
}
export type SharedVisits = ReturnType<typeof presentShared>
