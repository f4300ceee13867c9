import { afterAll, beforeAll, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

type Caller = Awaited<ReturnType<typeof signedIn>>
interface Case { id: string, pathwayId: string, position: number, plannedMinutes: number, state: string, surgeryAt: string, predictedMinutes: number, ownCases: number, patient: { name: string } }
interface List { id: string, rowVersion: number, lockedAt: string | null, cases: Case[], changesSinceLock: { words: string, reason: string, by: string }[], forecast: { expectedFinishMinute: number, overrunProbability: number } | null, abilities: Record<string, boolean> }
interface Day { site: { id: string }, lists: List[], waiting: { id: string, minutes: number }[], surgeons: { id: string, name: string }[] }

let product: Product
let coordinator: Caller
let surgeon: Caller
let siteId: string
let waiting: string[]
const dayMs = 86_400_000
let room = 0

beforeAll(async () => {
  product = await startProduct()
  coordinator = await signedIn(product, 'corin.vellacott')
  surgeon = await signedIn(product, 'tobias.quillfeather')
  siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id
  waiting = (await coordinator<Day>(`/api/theatre?siteId=${siteId}`)).body.waiting.map(each => each.id)
})
afterAll(() => product?.stop())

const dateOf = (days: number) => new Date(Date.now() + days * dayMs).toISOString().slice(0, 10)
const at = (days: number, time: string) => `${dateOf(days)}T${time}:00.000Z`

/** A list of Tobias Quillfeather's so many days ahead, 09:00 to 13:00 UTC, with these eyes on it. */
async function makeList(days: number, pathwayIds: string[]): Promise<string> {
  const surgeonId = (await product.pool.query('select id from people where name = \'Tobias Quillfeather\'')).rows[0].id
  const made = await coordinator<{ id: string }>('/api/theatre', { body: { siteId, surgeonId, room: `Theatre T${++room}`, startsAt: at(days, '09:00'), endsAt: at(days, '13:00') } })
  expect(made.status).toBe(200)
  for (const pathwayId of pathwayIds) expect((await coordinator(`/api/theatre/list/${made.body.id}/case`, { body: { pathwayId } })).status).toBe(200)
  return made.body.id
}
async function listOf(days: number, id: string, as = coordinator): Promise<List> {
  const day = await as<Day>(`/api/theatre?siteId=${siteId}&date=${dateOf(days)}`)
  const list = day.body.lists.find(each => each.id === id)
  if (!list) throw new Error('the list is not on that day')
  return list
}
const takeWaiting = (count: number) => waiting.splice(0, count)
const emptyList = async (list: List) => {
  for (const one of list.cases.filter(each => each.state === 'planned')) await coordinator(`/api/theatre/case/${one.id}/cancel`, { body: { reason: 'End of this test' } })
  waiting.push(...list.cases.map(each => each.pathwayId))
}
const reminders = async (pathwayId: string) => (await product.pool.query('select state, due_at from messages where pathway_id = $1 and kind = \'surgery.reminder\'', [pathwayId])).rows as { state: string, due_at: Date }[]

test('a dense nucleus takes its time on the list and raises the chance that it overruns', async () => {
  const [usual, dense] = takeWaiting(2)
  const factors = { cataract: 'brunescent', locs: { opalescence: 5.6, colour: 5.8 }, canLieFlat: true, pupil: 'large', alphaBlocker: 'none' }
  expect((await surgeon(`/api/theatre/pathway/${dense}/risk`, { body: { factors, baseVersion: 0 } })).status).toBe(200)
  const id = await makeList(4, [usual!])
  const before = await listOf(4, id)
  expect((await coordinator(`/api/theatre/list/${id}/case`, { body: { pathwayId: dense } })).status).toBe(200)
  const after = await listOf(4, id)
  const [first, second] = after.cases
  expect(second!.predictedMinutes).toBeGreaterThan(2 * first!.predictedMinutes)
  expect(after.forecast!.expectedFinishMinute).toBeGreaterThan(before.forecast!.expectedFinishMinute + 50)
  expect(after.forecast!.overrunProbability).toBeGreaterThan(before.forecast!.overrunProbability)
})

test('a dense nucleus found after the eye was listed makes its case longer, unless a person set the minutes', async () => {
  const [eye, other] = takeWaiting(2)
  const id = await makeList(11, [eye!, other!])
  const before = await listOf(11, id)
  const [first, second] = before.cases
  expect((await coordinator(`/api/theatre/case/${second!.id}`, { method: 'PUT', body: { rowVersion: before.rowVersion, plannedMinutes: 40, constraints: {} } })).status).toBe(200)
  const factors = { cataract: 'brunescent', locs: { opalescence: 5.6, colour: 5.8 } }
  for (const pathwayId of [eye, other]) {
    const risk = (await product.pool.query('select coalesce(max(version), 0)::int v from risk_assessments where pathway_id = $1', [pathwayId])).rows[0].v as number
    expect((await surgeon(`/api/theatre/pathway/${pathwayId}/risk`, { body: { factors, baseVersion: risk } })).status).toBe(200)
  }
  const after = await listOf(11, id)
  expect(after.cases[0]!.plannedMinutes).toBeGreaterThan(2 * first!.plannedMinutes)
  expect(after.cases[1]!.plannedMinutes).toBe(40)
  expect(new Date(after.cases[1]!.surgeryAt).getTime() - new Date(after.cases[0]!.surgeryAt).getTime()).toBe((after.cases[0]!.plannedMinutes + 10) * 60_000)
})

test('another order gives every patient their new time and a new reminder, and a stale one answers with the order in the record', async () => {
  const id = await makeList(12, takeWaiting(3))
  const list = await listOf(12, id)
  const ids = list.cases.map(each => each.id)
  const last = list.cases[2]!
  const before = await reminders(last.pathwayId)
  const order = [ids[2], ids[0], ids[1]]
  const saved = await coordinator<{ rowVersion: number }>(`/api/theatre/list/${id}/order`, { method: 'PUT', body: { rowVersion: list.rowVersion, order } })
  expect(saved.status).toBe(200)
  expect(saved.body.rowVersion).toBe(list.rowVersion + 1)
  const after = await listOf(12, id)
  expect(after.cases.map(each => each.id)).toEqual(order)
  expect(after.cases[0]!.surgeryAt).toBe(at(12, '09:00'))
  expect(new Date(after.cases[1]!.surgeryAt).getTime() - new Date(after.cases[0]!.surgeryAt).getTime()).toBe((last.plannedMinutes + 10) * 60_000)
  const now = await reminders(last.pathwayId)
  expect(before.length).toBeGreaterThan(0)
  expect(now.filter(each => each.state === 'withdrawn').length).toBe(before.length)
  expect(now.filter(each => each.state === 'queued').length).toBe(before.length)

  const stale = await coordinator<{ code: string, current: { rowVersion: number, order: { id: string, patientName: string, eye: string }[] } }>(`/api/theatre/list/${id}/order`, { method: 'PUT', body: { rowVersion: list.rowVersion, order: ids } })
  expect([stale.status, stale.body.code]).toEqual([409, 'theatre.stale'])
  expect(stale.body.current.order.map(each => each.id)).toEqual(order)
  expect(stale.body.current.order[0]).toMatchObject({ patientName: last.patient.name })
  expect(stale.body.current.rowVersion).toBe(saved.body.rowVersion)
  const halved = await coordinator(`/api/theatre/list/${id}/order`, { method: 'PUT', body: { rowVersion: saved.body.rowVersion, order: ids.slice(1) } })
  expect(halved.status).toBe(409)
  expect((await listOf(12, id)).cases.map(each => each.id)).toEqual(order)
  await emptyList(after)
})

test('an order that puts diabetes behind the others, or a case outside the anaesthetist’s hours, needs a reason', async () => {
  const id = await makeList(13, takeWaiting(2))
  const start = await listOf(13, id)
  const [first, second] = start.cases
  const change = (one: Case, rowVersion: number, constraints: object) => coordinator(`/api/theatre/case/${one.id}`, { method: 'PUT', body: { rowVersion, plannedMinutes: one.plannedMinutes, constraints } })
  expect((await change(second!, start.rowVersion, { diabetic: true })).status).toBe(200)
  expect((await change(second!, start.rowVersion, {})).status).toBe(409)
  const put = async (order: string[], reason = '') => coordinator<{ code: string, breaches: { kind: string, sentence: string }[] }>(`/api/theatre/list/${id}/order`, { method: 'PUT', body: { rowVersion: (await listOf(13, id)).rowVersion, order, reason } })
  const refused = await put([first!.id, second!.id])
  expect([refused.status, refused.body.code]).toEqual([422, 'theatre.reason-needed'])
  expect(refused.body.breaches).toEqual([expect.objectContaining({ kind: 'diabetic-first', sentence: expect.stringContaining(second!.patient.name) })])
  expect((await put([second!.id, first!.id])).status).toBe(200)
  expect((await put([first!.id, second!.id], 'Transport comes late')).status).toBe(200)

  const other = await listOf(13, id)
  expect((await coordinator(`/api/theatre/list/${id}`, { method: 'PUT', body: { rowVersion: other.rowVersion, anaesthetistFrom: at(13, '11:00'), anaesthetistTo: at(13, '12:00') } })).status).toBe(200)
  expect((await change(first!, other.rowVersion + 1, { needsAnaesthetist: true })).status).toBe(200)
  const early = await put([second!.id, first!.id])
  expect(early.body.breaches.map(each => each.kind)).toEqual(['anaesthetist'])
  const bad = await coordinator<{ fields: { field: string }[] }>(`/api/theatre/case/${first!.id}`, { method: 'PUT', body: { rowVersion: 1, plannedMinutes: 2, constraints: { interpreterFrom: '25:00' } } })
  expect(bad.status).toBe(422)
  expect(bad.body.fields.map(each => each.field).sort()).toEqual(['constraints.interpreterFrom', 'plannedMinutes'])
  await emptyList(other)
})

test('the surgeon locks the list; what changes later carries a reason and stands as a change since the lock', async () => {
  const [one, two, spare] = takeWaiting(3)
  const id = await makeList(14, [one!, two!])
  const { rowVersion, cases } = await listOf(14, id)
  expect((await coordinator(`/api/theatre/list/${id}/lock`, { body: { rowVersion } })).status).toBe(403)
  expect((await signedIn(product, 'ada.renshawe').then(ada => ada(`/api/theatre/list/${id}/lock`, { body: { rowVersion } }))).status).toBe(403)
  expect((await surgeon(`/api/theatre/list/${id}/lock`, { body: { rowVersion: rowVersion - 1 } })).status).toBe(409)
  expect((await surgeon(`/api/theatre/list/${id}/lock`, { body: { rowVersion } })).status).toBe(200)
  expect((await surgeon(`/api/theatre/list/${id}/lock`, { body: { rowVersion: rowVersion + 1 } })).status).toBe(409)

  const silent = await coordinator<{ code: string }>(`/api/theatre/list/${id}/case`, { body: { pathwayId: spare } })
  expect([silent.status, silent.body.code]).toEqual([422, 'theatre.reason-needed'])
  expect((await listOf(14, id)).cases).toHaveLength(2)
  const replaced = await coordinator<{ id: string, position: number }>(`/api/theatre/case/${cases[0]!.id}/replace`, { body: { pathwayId: spare, reason: 'Has a cold' } })
  expect(replaced.status).toBe(200)
  const locked = await listOf(14, id)
  expect(locked.cases.map(each => each.pathwayId)).toEqual([spare, two])
  expect(locked.changesSinceLock).toEqual([expect.objectContaining({ reason: 'Has a cold', by: 'Corin Vellacott', words: expect.stringContaining(cases[0]!.patient.name) })])
  expect((await coordinator<Day>(`/api/theatre?siteId=${siteId}`)).body.waiting.map(each => each.id)).toContain(one)
  expect((await surgeon(`/api/theatre/list/${id}/unlock`, { body: { rowVersion: locked.rowVersion } })).status).toBe(200)
  expect((await listOf(14, id)).changesSinceLock).toEqual([])
  await expect(product.pool.query('update theatre_list_changes set words = \'nothing\'')).rejects.toThrow('never changed')
  waiting.push(one!)
  await emptyList(locked)
})

test('times come from the surgeon’s own finished cases, drawn towards the default', async () => {
  const [eye] = takeWaiting(1)
  const id = await makeList(15, [eye!])
  const before = (await listOf(15, id)).cases[0]!
  // Forty finished cases of a very quick surgeon: as many rows as the demo has eyes that are past surgery.
  await product.pool.query(`insert into theatre_cases (list_id, pathway_id, position, planned_minutes, state, started_at, ended_at)
    select $1, id, 100 + row_number() over (), 25, 'done', now() - interval '30 days', now() - interval '30 days' + interval '12 minutes' from pathways where stage = 'discharge' limit 40`, [id])
  const after = (await listOf(15, id)).cases.find(each => each.id === before.id)!
  expect(after.ownCases).toBeGreaterThan(before.ownCases)
  expect(after.predictedMinutes).toBeLessThan(before.predictedMinutes)
  expect(after.predictedMinutes).toBeGreaterThanOrEqual(12)
})

test('a list of another site is not found, and a nurse reads a list but does not order it', async () => {
  const id = await makeList(16, takeWaiting(1))
  const { rowVersion, cases } = await listOf(16, id)
  const body = { rowVersion, order: cases.map(each => each.id) }
  const elsewhere = await signedIn(product, 'sorrel.wincanton')
  expect((await elsewhere(`/api/theatre/list/${id}/order`, { method: 'PUT', body })).status).toBe(404)
  expect((await elsewhere(`/api/theatre/case/${cases[0]!.id}`, { method: 'PUT', body: { rowVersion, plannedMinutes: 30, constraints: {} } })).status).toBe(404)
  expect((await elsewhere(`/api/theatre/case/${cases[0]!.id}/replace`, { body: { pathwayId: waiting[0], reason: 'None of theirs' } })).status).toBe(404)
  const nurse = await signedIn(product, 'maren.oxlade')
  expect((await listOf(16, id, nurse)).abilities).toMatchObject({ canOrder: false, canLock: false, canPrint: true })
  expect((await nurse(`/api/theatre/list/${id}/order`, { method: 'PUT', body })).status).toBe(403)
  const community = await signedIn(product, 'petra.lanyon')
  expect((await community('/api/theatre')).status).toBe(404)
  expect((await listOf(16, id)).rowVersion).toBe(rowVersion)
})
