import { eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { clinicSessions, sessionPlaces, sites } from '#server/db/schema/index'
import { bookingNeedOf, loadDistances, loadFellowVisits } from '#server/services/visit/booking-need'
import type { NeedRow } from '#server/services/visit/booking-need'
import { DomainError } from '#shared/domain/errors'
import { constraints } from '#shared/domain/visit/booking-constraints'

/**
 * Holds a day-one place against what the eye needs. A place outside it is not taken silently: the refusal names each need, and a person
 * who books it all the same says why.
 */
export async function checkSuitable(tx: Transaction, row: NeedRow, placeId: string, now: Date, despite: string | undefined): Promise<string[]> {
  const [[place], siteDistances, fellows] = await Promise.all([
    tx.select({ placeId: sessionPlaces.id, startsAt: sessionPlaces.startsAt, minutes: sessionPlaces.minutes, room: clinicSessions.room, siteId: clinicSessions.siteId, siteName: sites.name, isHospital: sites.isHospital, zone: sites.zone })
      .from(sessionPlaces).innerJoin(clinicSessions, eq(clinicSessions.id, sessionPlaces.sessionId)).innerJoin(sites, eq(sites.id, clinicSessions.siteId)).where(eq(sessionPlaces.id, placeId)),
    loadDistances(tx), loadFellowVisits(tx, [row]),
  ])
  if (!place) return []
  const need = bookingNeedOf(row, now, fellows[0])
  const unmet = constraints.filter(each => !each.allows(need, place, { siteDistances, now })).map(each => each.id)
  if (unmet.length && !despite) {
    const words = unmet.map(id => unmetWords[id] ?? 'It does not suit this eye.')
    throw new DomainError('visit.not-suitable', `This place does not suit. ${words.join(' ')} Choose another, or say why it is booked all the same.`, { fields: [{ field: 'despite', code: 'required', message: 'Say why it is booked all the same.' }], detail: { unmet: words } })
  }
  return unmet
}

const unmetWords: Record<string, string> = {
  'past': 'That time has passed.', 'too-late': 'It comes after the latest safe time.', 'hospital': 'This eye must be seen at the hospital.', 'before-noon': 'This eye must be seen before noon.', 'patient-time': 'The patient cannot come then.',
  'transport': 'Transport does not reach it.', 'interpreter': 'The interpreter is not there then.', 'fellow-eye': 'The fellow eye is seen another day or elsewhere.', 'distance': 'The site is too far from the patient’s own.',
}
