import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { constraints, fits } from '#shared/domain/visit/booking-constraints'
import type { BookingNeed, BookingPlace } from '#shared/domain/visit/booking-constraints'
import { proposeBookings } from '#shared/domain/visit/propose-bookings'
import type { BookingRequest } from '#shared/domain/visit/propose-bookings'

// Friday 16 October 2026 is still summer time at the site: 08:30 there is 07:30Z.
const site = (clock: string) => new Date(`2026-10-16T${clock}:00+01:00`)
const now = site('07:00')
const siteDistances = { ferncombe: { tidemill: 12, farside: 90 } }
const place = (placeId: string, clock: string, more: Partial<BookingPlace> = {}): BookingPlace => ({ placeId, siteId: 'ferncombe', siteName: 'Ferncombe', isHospital: true, zone: 'Europe/London', room: 'Room 1', startsAt: site(clock), minutes: 20, ...more })
const tidemill = { siteId: 'tidemill', siteName: 'Tidemill', isHospital: false } as const
const need = (pathwayId: string, more: Partial<BookingNeed> = {}): BookingNeed => ({ pathwayId, patientId: `patient of ${pathwayId}`, siteId: 'ferncombe', isRequired: false, latestSafeAt: site('16:00'), inPerson: true, atHospital: false, beforeNoon: false, ...more })
const plan = (needs: BookingNeed[], places: BookingPlace[]) => proposeBookings({ needs, places, siteDistances, now })
const placed = (result: ReturnType<typeof plan>) => Object.fromEntries(result.proposals.map(each => [each.pathwayId, each.placeId]))

describe('a proposal', () => {
  test('gives each the first place that suits, in the order of the list', () => {
    const result = plan([need('a'), need('b')], [place('p2', '08:50'), place('p1', '08:30'), place('p3', '09:10')])
    expect(placed(result)).toEqual({ a: 'p1', b: 'p2' })
    expect(result.proposals[0]).toEqual({ pathwayId: 'a', placeId: 'p1', siteId: 'ferncombe', startsAt: site('08:30'), why: 'Nothing special. First place that suits.', otherPlaceIds: ['p3'] })
    expect(result.proposals[1]?.why).toBe('Nothing special. Earlier places are left for others.')
  })

  test('moves one that could go elsewhere rather than leave another without', () => {
    const early = need('b', { notAfter: site('08:30') })
    expect(placed(plan([need('a'), early], [place('p1', '08:30'), place('p2', '09:10')]))).toEqual({ a: 'p2', b: 'p1' })
  })

  test('serves a required check first when there is one place too few', () => {
    const result = plan([need('a'), need('b', { isRequired: true, because: 'Only seeing eye.', beforeNoon: true })], [place('p1', '08:30')])
    expect(placed(result)).toEqual({ b: 'p1' })
    expect(result.proposals[0]?.why).toBe('Only seeing eye. In person, before noon. First place that suits.')
    expect(result.unplaced).toEqual([{ pathwayId: 'a', why: 'Every place that suits is taken: there was one.', waysOut: ['Open another place', 'Change one of the other rows', 'Record another kind of check'] }])
  })

  test('prefers the patient’s own site, then a near one, and never a far or unknown one', () => {
    const far = { siteId: 'farside', siteName: 'Farside', isHospital: true }
    const unknown = { siteId: 'elsewhere', siteName: 'Elsewhere', isHospital: true }
    expect(placed(plan([need('a')], [place('t', '08:30', tidemill), place('f', '11:00')]))).toEqual({ a: 'f' })
    expect(plan([need('a')], [place('t', '08:30', tidemill)]).proposals[0]).toMatchObject({ placeId: 't', why: 'Tidemill is 12 minutes away. First place that suits.' })
    for (const other of [far, unknown]) expect(plan([need('a')], [place('x', '08:30', other)]).unplaced[0]).toMatchObject({ why: 'Only a site too far from the patient has a place.' })
    expect(placed(plan([need('a', { siteId: 'tidemill' })], [place('f', '09:00')]))).toEqual({ a: 'f' })
  })

  test('says what stands in the way of transport, and three ordinary ways out', () => {
    const late = need('a', { isRequired: true, transport: { siteId: 'ferncombe', arrivesAt: site('11:40') } })
    expect(plan([late], [place('p1', '10:50'), place('p2', '11:30')])).toEqual({
      proposals: [],
      unplaced: [{ pathwayId: 'a', why: 'Transport arrives at 11:40; no free place there is later.', waysOut: ['Ask transport for 10:50, Room 1, Ferncombe', 'Ask the surgeon to decide on another kind of check'] }],
    })
  })

  test.each<[string, Partial<BookingNeed>, BookingPlace, string]>([
    ['past', {}, place('p', '06:40'), 'The places that would suit have passed.'],
    ['too-late', { latestSafeAt: site('09:00') }, place('p', '09:10'), 'The free places come after Fri 16 October, 09:00, the latest safe time.'],
    ['hospital', { atHospital: true }, place('p', '09:10', tidemill), 'It must be at the hospital, which has no free place in time.'],
    ['before-noon', { beforeNoon: true }, place('p', '12:00'), 'It must be before noon, and no morning place is free.'],
    ['patient-time', { notBefore: site('10:30') }, place('p', '10:10'), 'No free place is at a time when the patient can come.'],
    ['transport', { transport: { siteId: 'ferncombe', arrivesAt: site('09:30') } }, place('p', '09:10'), 'Transport arrives at 09:30; no free place there is later.'],
    ['interpreter', { interpreter: { language: 'Polish', from: site('09:30'), to: site('10:00') } }, place('p', '09:50'), 'No free place falls in the interpreter’s time, from 09:30.'],
    ['fellow-eye', { fellowVisit: { siteId: 'tidemill', startsAt: site('09:00') } }, place('p', '09:10'), 'The fellow eye is seen another day or elsewhere.'],
    ['distance', { siteId: 'farside' }, place('p', '09:10'), 'Only a site too far from the patient has a place.'],
  ])('%s alone leaves a need without a place, and says so', (id, more, only, why) => {
    const result = plan([need('a', more)], [only])
    expect(result.proposals).toEqual([])
    expect(result.unplaced[0]?.why).toBe(why)
    expect(result.unplaced[0]?.waysOut.length).toBeGreaterThanOrEqual(2)
    expect(constraints.map(each => each.id)).toContain(id)
  })

  test('keeps to the interpreter’s and the patient’s time', () => {
    const result = plan([need('a', { interpreter: { language: 'Polish', from: site('09:30'), to: site('10:00') }, notBefore: site('09:00') })], [place('p1', '08:30'), place('p2', '09:30'), place('p3', '09:50')])
    expect(result.proposals[0]).toMatchObject({ placeId: 'p2', why: 'Interpreter (Polish) from 09:30. Cannot come before 09:00. First place that suits.' })
  })

  test('what is still to be arranged is said and stops nothing', () => {
    expect(plan([need('a', { transport: 'to-arrange', interpreter: { language: 'Polish' } })], [place('p1', '08:30')]).proposals[0]?.why).toBe('Transport must still be booked. Interpreter (Polish) must still be booked. First place that suits.')
  })

  test('places both eyes of one patient together, or leaves both to a person', () => {
    const eyes = [need('right', { patientId: 'x' }), need('left', { patientId: 'x' })]
    const result = plan([need('a'), ...eyes], [place('p1', '08:30'), place('p2', '11:00'), place('p3', '11:20', { room: 'Room 2' })])
    expect(placed(result)).toEqual({ a: 'p1', right: 'p2', left: 'p3' })
    expect(plan(eyes, [place('p1', '08:30'), place('p2', '11:20')]).unplaced.map(each => each.why)).toEqual(['No two places for both eyes are free close together.', 'No two places for both eyes are free close together.'])
  })

  test('a place at the latest safe time itself still suits', () => {
    expect(placed(plan([need('a', { latestSafeAt: site('09:10') })], [place('p', '09:10')]))).toEqual({ a: 'p' })
  })

  test('without any place it says so', () => {
    expect(plan([need('a')], []).unplaced[0]).toMatchObject({ why: 'There is no free place at all.', waysOut: ['Open a place', 'Record another kind of check'] })
  })
})

const clockMinutes = fc.integer({ min: 0, max: 27 }).map(index => new Date(site('06:40').getTime() + index * 20 * 60_000))
const sites = { ferncombe: { siteId: 'ferncombe', siteName: 'Ferncombe', isHospital: true }, tidemill, farside: { siteId: 'farside', siteName: 'Farside', isHospital: true } } as const
const anySite = fc.constantFrom('ferncombe', 'tidemill', 'farside')
const maybe = <T>(value: fc.Arbitrary<T>) => fc.option(value, { nil: undefined, freq: 3 })
const anyRequest: fc.Arbitrary<BookingRequest> = fc.record({
  needs: fc.array(fc.record({ isRequired: fc.boolean(), siteId: anySite, latestSafeAt: clockMinutes, atHospital: fc.boolean(), beforeNoon: fc.boolean(), notBefore: maybe(clockMinutes), transport: maybe(fc.oneof(fc.constant('to-arrange' as const), fc.record({ siteId: anySite, arrivesAt: clockMinutes }))), sharesPatient: fc.integer({ min: 0, max: 5 }) }), { maxLength: 10 })
    .map(rows => rows.map(({ sharesPatient, ...row }, index) => need(`n${index}`, { ...row, patientId: sharesPatient === 0 && index % 2 === 1 ? `patient of n${index - 1}` : `patient of n${index}` }))),
  places: fc.array(fc.record({ at: clockMinutes, where: anySite }), { maxLength: 12 }).map(rows => rows.map(({ at, where }, index) => place(`p${String(index).padStart(2, '0')}`, '08:30', { ...sites[where], startsAt: at }))),
}).map(({ needs, places }) => ({ needs, places, siteDistances, now }))

describe('any proposal', () => {
  test('answers for every need once, in list order, and gives no place twice and none outside a constraint', () => {
    fc.assert(fc.property(anyRequest, (request) => {
      const { proposals, unplaced } = proposeBookings(request)
      expect([...proposals, ...unplaced].map(each => each.pathwayId).sort()).toEqual(request.needs.map(each => each.pathwayId).sort())
      expect(proposals.map(each => each.pathwayId)).toEqual(request.needs.map(each => each.pathwayId).filter(id => proposals.some(each => each.pathwayId === id)))
      expect(new Set(proposals.map(each => each.placeId)).size).toBe(proposals.length)
      for (const proposal of proposals) {
        const asked = request.needs.find(each => each.pathwayId === proposal.pathwayId)!
        const given = request.places.find(each => each.placeId === proposal.placeId)!
        expect(fits(asked, given, request)).toBe(true)
        expect(proposal.why.length).toBeGreaterThan(0)
        for (const other of proposal.otherPlaceIds) {
          expect(fits(asked, request.places.find(each => each.placeId === other)!, request)).toBe(true)
          expect(proposals.map(each => each.placeId)).not.toContain(other)
        }
      }
      for (const left of unplaced) expect(left.why !== '' && left.waysOut.length >= 2).toBe(true)
    }), { numRuns: 500 })
  })

  test('is the same for the same request, in whatever order the places come', () => {
    fc.assert(fc.property(anyRequest, (request) => {
      const first = proposeBookings(request)
      expect(proposeBookings(request)).toEqual(first)
      expect(placed(proposeBookings({ ...request, places: [...request.places].reverse() }))).toEqual(placed(first))
    }), { numRuns: 300 })
  })

  test('places as many as can be placed', () => {
    fc.assert(fc.property(anyRequest, (request) => {
      const needs = request.needs.map((each, index) => ({ ...each, patientId: `alone ${index}` }))
      const { proposals } = proposeBookings({ ...request, needs })
      expect(proposals.length).toBe(mostPlaceable(needs, request))
    }), { numRuns: 150 })
  })
})

/** The same question answered another way: try every assignment over the set of places taken. */
function mostPlaceable(needs: readonly BookingNeed[], request: BookingRequest): number {
  let reachable = new Map<number, number>([[0, 0]])
  for (const one of needs) {
    const next = new Map(reachable)
    request.places.forEach((each, bit) => {
      if (!fits(one, each, request)) return
      for (const [taken, count] of reachable) {
        if (taken & (1 << bit)) continue
        const joined = taken | (1 << bit)
        next.set(joined, Math.max(next.get(joined) ?? 0, count + 1))
      }
    })
    reachable = next
  }
  return Math.max(...reachable.values())
}
