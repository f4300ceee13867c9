import type { ServiceContext } from '#server/services/context'
import { bookingNeedOf, loadDistances, loadFellowVisits } from '#server/services/visit/booking-need'
import { listOpenPlaces } from '#server/services/visit/list-open-places'
import { listToBook } from '#server/services/visit/list-to-book'
import { proposeBookings } from '#shared/domain/visit/propose-bookings'

const daysLooked = 3

/** One place proposed for each eye that waits for its day-one check. Reads only: nothing is booked and nothing is held. */
export async function proposeList(ctx: ServiceContext, input: { siteId?: string }) {
  const [rows, open, siteDistances] = await Promise.all([listToBook(ctx, input), listOpenPlaces(ctx, { kind: 'day-one', days: daysLooked }), loadDistances(ctx.db)])
  const patientsOf = rows.map(row => ({ id: row.id, patientId: row.patient.id }))
  const fellows = await loadFellowVisits(ctx.db, patientsOf)
  const needs = rows.map(row => bookingNeedOf({ ...row, patientId: row.patient.id, needsTransport: row.patient.needsTransport, interpreterLanguage: row.patient.interpreterLanguage }, ctx.now, fellows.find(each => each.patientId === row.patient.id && each.pathwayId !== row.id)))
  const places = open.map(place => ({ ...place, placeId: place.id }))
  return { rows, needs, siteDistances, places: open, plan: proposeBookings({ needs, places, siteDistances, now: ctx.now }), now: ctx.now }
}
