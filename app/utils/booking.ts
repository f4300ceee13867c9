import type { Proposal } from '#server/presenters/booking'
import type { BookingNeed, BookingPlace } from '#shared/domain/visit/booking-constraints'
import { fits } from '#shared/domain/visit/booking-constraints'

/** The need of one row as the rules take it: the same rules that the server asks before it books. */
export function needOf(row: Proposal['rows'][number]): BookingNeed {
  const { need } = row
  return {
    pathwayId: row.pathwayId, patientId: row.patient.id, siteId: row.siteId, isRequired: need.isRequired, latestSafeAt: new Date(need.latestSafeAt ?? row.operatedAt ?? 0), inPerson: need.inPerson,
    atHospital: need.constraints.atHospital, beforeNoon: need.constraints.beforeNoon, transport: row.needsTransport ? 'to-arrange' : undefined, interpreter: row.interpreterLanguage ? { language: row.interpreterLanguage } : undefined,
    fellowVisit: row.fellowVisit ? { siteId: row.fellowVisit.siteId, startsAt: new Date(row.fellowVisit.startsAt) } : undefined,
  }
}

export function placeSuits(row: Proposal['rows'][number], place: Omit<BookingPlace, 'startsAt'> & { startsAt: string }, proposal: Pick<Proposal, 'siteDistances' | 'now'>): boolean {
  return fits(needOf(row), { ...place, startsAt: new Date(place.startsAt) }, { siteDistances: proposal.siteDistances, now: new Date(proposal.now) })
}

/** What the eye needs, in one line: why, where, by when, and what else must come together. */
export function needWords(row: Pick<Proposal['rows'][number], 'need' | 'needsTransport' | 'interpreterLanguage' | 'alerts' | 'fellowVisit'>, by: string): string {
  const { need } = row
  const lines = need.reasons.map(reason => reason.sentence)
  if (need.constraints.atHospital) lines.push('At the hospital.')
  else if (need.inPerson) lines.push('In person.')
  if (need.constraints.beforeNoon) lines.push('Before noon.')
  if (row.fellowVisit) lines.push('With the fellow eye.')
  if (row.needsTransport) lines.push('Transport to arrange.')
  if (row.interpreterLanguage) lines.push(`Interpreter: ${row.interpreterLanguage}.`)
  if (need.unknown.length) lines.push(`Not recorded, so taken as needed: ${need.unknown.join(', ')}.`)
  lines.push(`Latest safe time ${by}.`)
  return lines.join(' ')
}
