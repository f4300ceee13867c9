import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

type Caller = Awaited<ReturnType<typeof signedIn>>
interface Place { id: string, startsAt: string, siteId: string, room: string }
interface Row { pathwayId: string, siteId: string, place: Place | null, others: Place[], waysOut: string[], why: string, need: { latestSafeAt: string, constraints: { atHospital: boolean, beforeNoon: boolean } } }
interface Session { id: string, rowVersion: number, room: string }

let product: Product
let nurse: Caller
let coordinator: Caller
let siteId: string
const dayMs = 86_400_000
const count = async (table: string) => (await product.pool.query(`select count(*)::int n from ${table}`)).rows[0].n as number
const ahead = (days: number, minutes = 0) => new Date(Math.floor(Date.now() / dayMs) * dayMs + days * dayMs + 9 * 3_600_000 + minutes * 60_000).toISOString()

beforeAll(async () => {
  product = await startProduct()
  nurse = await signedIn(product, 'maren.oxlade')
  coordinator = await signedIn(product, 'corin.vellacott')
  siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id
})
afterAll(() => product?.stop())

describe('the proposal', () => {
  test('gives each eye a place that meets its need, no place twice, or says why not and what would help; and books nothing', async () => {
    const before = [await count('visits'), await count('messages')]
    const { status, body } = await nurse<{ rows: Row[] }>('/api/visit/proposal')
    expect(status).toBe(200)
    expect(body.rows.length).toBeGreaterThan(5)
    const placed = body.rows.filter(row => row.place)
    expect(placed.length).toBeGreaterThan(0)
    expect(new Set(placed.map(row => row.place!.id)).size).toBe(placed.length)
    for (const row of placed) {
      expect(row.place!.startsAt <= row.need.latestSafeAt).toBe(true)
      if (row.need.constraints.atHospital) expect(row.place!.siteId).toBe(siteId)
      expect(row.why).not.toBe('')
    }
    for (const row of body.rows.filter(each => !each.place)) expect([row.waysOut.length > 0, row.why.length > 0]).toEqual([true, true])
    expect([await count('visits'), await count('messages')]).toEqual(before)
  })

  test('confirmed for two eyes at one place books one and says of the other why not', async () => {
    const { body } = await nurse<{ rows: Row[] }>('/api/visit/proposal')
    const [first, second] = body.rows.filter(row => row.place && row.siteId === siteId)
    const answer = await nurse<{ booked: { pathwayId: string }[], refused: { pathwayId: string, code: string, reason: string }[] }>('/api/visit/book-list', { body: { bookings: [first, second].map(row => ({ pathwayId: row!.pathwayId, placeId: first!.place!.id, despite: 'Agreed with the surgeon' })) } })
    expect(answer.body.booked.map(each => each.pathwayId)).toEqual([first!.pathwayId])
    expect(answer.body.refused.map(each => [each.pathwayId, each.code])).toEqual([[second!.pathwayId, 'visit.place-taken']])
    const again = await nurse<{ code: string, alternatives: { placeId: string }[] }>('/api/visit', { body: { pathwayId: second!.pathwayId, placeId: first!.place!.id, kind: 'day-one', despite: 'Agreed with the surgeon' } })
    expect([again.status, again.body.code]).toEqual([409, 'visit.place-taken'])
    expect(again.body.alternatives.length).toBeGreaterThan(0)
    expect(again.body.alternatives.map(each => each.placeId)).not.toContain(first!.place!.id)
  })

  test('a place after the latest safe time is refused with what it lacks, changes nothing, and is booked only with a reason that stays', async () => {
    const { body } = await nurse<{ rows: Row[] }>('/api/visit/proposal')
    const row = body.rows.find(each => each.siteId === siteId)!
    const late = (await nurse<{ items: Place[] }>('/api/visit/open-places?kind=day-one&days=5')).body.items.filter(place => place.siteId === siteId && place.startsAt > row.need.latestSafeAt).at(-1)!
    const before = await count('visits')
    const refused = await nurse<{ code: string, unmet: string[], fields: { field: string }[] }>('/api/visit', { body: { pathwayId: row.pathwayId, placeId: late.id, kind: 'day-one' } })
    expect([refused.status, refused.body.code, refused.body.fields[0]?.field]).toEqual([422, 'visit.not-suitable', 'despite'])
    expect(refused.body.unmet).toContain('It comes after the latest safe time.')
    expect(await count('visits')).toBe(before)
    expect((await nurse('/api/visit', { body: { pathwayId: row.pathwayId, placeId: late.id, kind: 'day-one', despite: 'Surgeon saw the eye this morning' } })).status).toBe(200)
    const { rows } = await product.pool.query('select detail from pathway_events where pathway_id = $1 and kind = \'visit-booked\'', [row.pathwayId])
    expect(rows[0].detail).toMatchObject({ despite: 'Surgeon saw the eye this morning', unmet: ['too-late'] })
  })
})

describe('a clinic session', () => {
  const made = (room: string, days = 20) => ({ siteId, kind: 'follow-up', room, startsAt: ahead(days), places: 3, minutes: 10 })

  test('is made by a coordinator with its places, and by nobody whose work it is not', async () => {
    const refused = await nurse('/api/visit/session', { body: made('Room N') })
    const elsewhere = await (await signedIn(product, 'sorrel.wincanton'))('/api/visit/session', { body: made('Room N') })
    expect([refused.status, elsewhere.status]).toEqual([403, 403])
    const session = await coordinator<Session>('/api/visit/session', { body: made('Room A1') })
    expect(session.status).toBe(200)
    expect((await product.pool.query('select count(*)::int n from session_places where session_id = $1', [session.body.id])).rows[0].n).toBe(3)
  })

  test('cannot take a room twice, even when two ask at the same moment', async () => {
    const answers = await Promise.all(Array.from({ length: 6 }, () => coordinator<{ code?: string }>('/api/visit/session', { body: made('Room A2') })))
    expect(answers.filter(each => each.status === 200)).toHaveLength(1)
    expect(new Set(answers.filter(each => each.status !== 200).map(each => each.body.code))).toEqual(new Set(['visit.room-taken']))
  })

  test('says what is wrong in which field', async () => {
    const wrong = await coordinator<{ fields: { field: string }[] }>('/api/visit/session', { body: { ...made(''), places: 0, minutes: 1 } })
    expect(wrong.status).toBe(422)
    expect(wrong.body.fields.map(each => each.field).sort()).toEqual(['minutes', 'places', 'room'])
    expect((await coordinator('/api/visit/session', { body: { ...made('Room A3'), startsAt: '2020-01-01T09:00:00.000Z' } })).status).toBe(422)
  })

  test('changes its capacity by adding and closing places, and a closed place takes nobody', async () => {
    const session = (await coordinator<Session>('/api/visit/session', { body: made('Room A4') })).body
    const more = await coordinator<Session>(`/api/visit/session/${session.id}/places`, { body: { places: 2, minutes: 10, rowVersion: session.rowVersion } })
    expect(more.status).toBe(200)
    const stale = await coordinator<{ code: string }>(`/api/visit/session/${session.id}/places`, { body: { places: 2, minutes: 10, rowVersion: session.rowVersion } })
    expect([stale.status, stale.body.code]).toEqual([409, 'visit.stale'])
    const overlap = await coordinator<{ code: string }>(`/api/visit/session/${session.id}/places`, { body: { places: 1, minutes: 10, rowVersion: more.body.rowVersion, startsAt: ahead(20, 5) } })
    expect([overlap.status, overlap.body.code]).toEqual([409, 'visit.conflict'])
    const { rows } = await product.pool.query('select id from session_places where session_id = $1 order by starts_at', [session.id])
    expect(rows).toHaveLength(5)
    expect((await coordinator(`/api/visit/place/${rows[0].id}/close`, { body: {} })).status).toBe(200)
    const pathwayId = (await product.pool.query('select id from pathways where site_id = $1 and stage = \'follow-up\' and not exists (select 1 from visits v where v.pathway_id = pathways.id and v.kind = \'final\') limit 1', [siteId])).rows[0].id
    const closed = await nurse<{ code: string }>('/api/visit', { body: { pathwayId, placeId: rows[0].id, kind: 'final' } })
    expect([closed.status, closed.body.code]).toEqual([409, 'visit.place-closed'])
    const visit = await nurse<{ id: string, rowVersion: number }>('/api/visit', { body: { pathwayId, placeId: rows[1].id, kind: 'final' } })
    expect(visit.status).toBe(200)

    const newest = (await product.pool.query('select row_version from clinic_sessions where id = $1', [session.id])).rows[0].row_version as number
    const stillBooked = await coordinator<{ code: string, waiting: { visitId: string }[] }>(`/api/visit/session/${session.id}/close`, { body: { rowVersion: newest } })
    expect([stillBooked.status, stillBooked.body.code, stillBooked.body.waiting.map(each => each.visitId)]).toEqual([409, 'visit.still-booked', [visit.body.id]])
    expect((await coordinator(`/api/visit/place/${rows[1].id}/close`, { body: {} })).status).toBe(409)
    expect((await nurse(`/api/visit/${visit.body.id}/cancel`, { body: { reason: 'Patient is abroad', rowVersion: visit.body.rowVersion } })).status).toBe(200)
    expect((await coordinator(`/api/visit/session/${session.id}/close`, { body: { rowVersion: newest } })).status).toBe(200)
    expect((await nurse('/api/visit', { body: { pathwayId, placeId: rows[2].id, kind: 'final' } })).status).toBe(409)
  })

  test('of another site is not found, and its room changes only on the version that was seen', async () => {
    const session = (await coordinator<Session>('/api/visit/session', { body: made('Room A5') })).body
    const foreign = await (await signedIn(product, 'sorrel.wincanton'))(`/api/visit/session/${session.id}`, { method: 'PUT', body: { room: 'Room Z', rowVersion: 1 } })
    expect(foreign.status).toBe(404)
    expect((await coordinator<Session>(`/api/visit/session/${session.id}`, { method: 'PUT', body: { room: 'Room B5', rowVersion: session.rowVersion } })).body.room).toBe('Room B5')
    expect((await coordinator(`/api/visit/session/${session.id}`, { method: 'PUT', body: { room: 'Room C5', rowVersion: session.rowVersion } })).status).toBe(409)
  })
})
