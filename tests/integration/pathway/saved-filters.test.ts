import { afterAll, beforeAll, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

type Caller = Awaited<ReturnType<typeof signedIn>>
interface Filters { items: { id: string, name: string, query: { show?: string, group?: string } }[] }
let product: Product
let coordinator: Caller, nurse: Caller

beforeAll(async () => {
  product = await startProduct()
  ;[coordinator, nurse] = await Promise.all([signedIn(product, 'corin.vellacott'), signedIn(product, 'maren.oxlade')])
})
afterAll(() => product?.stop())
const save = (as: Caller, name: string, query: object) => as<Filters & { code?: string, fields?: { field: string }[] }>('/api/pathway/filter', { body: { name, query } })

test('a filter is its own person’s: kept under a name, replaced by the same name, and nobody else’s to read or remove', async () => {
  expect((await save(coordinator, 'Press now', { show: 'late' })).status).toBe(200)
  expect((await save(coordinator, 'Press now', { show: 'escalated', group: 'day-one' })).body.items.map(({ name, query }) => ({ name, query }))).toEqual([{ name: 'Press now', query: { show: 'escalated', group: 'day-one' } }])
  expect((await nurse<Filters>('/api/pathway/filter')).body.items).toEqual([])
  const { body: { items: [own] } } = await coordinator<Filters>('/api/pathway/filter')
  expect((await nurse(`/api/pathway/filter/${own!.id}`, { method: 'DELETE' })).status).toBe(404)
  expect((await coordinator<Filters>('/api/pathway/filter')).body.items.length).toBe(1)
  expect((await coordinator<Filters>(`/api/pathway/filter/${own!.id}`, { method: 'DELETE' })).body.items).toEqual([])
})

test('a filter without a name, of an unknown kind, or beyond twenty is refused, and nothing is kept of it', async () => {
  const nameless = await save(nurse, '  ', { show: 'late' })
  expect([nameless.status, nameless.body.fields?.[0]?.field]).toEqual([422, 'name'])
  expect((await save(nurse, 'Strange', { show: 'everything' })).status).toBe(422)
  for (let n = 1; n <= 20; n++) expect((await save(nurse, `Filter ${n}`, { show: 'late' })).status).toBe(200)
  const more = await save(nurse, 'Filter 21', { show: 'late' })
  expect([more.status, more.body.fields?.[0]?.field]).toEqual([422, 'name'])
  expect((await save(nurse, 'Filter 20', { show: 'escalated' })).status, 'a kept one may still change').toBe(200)
  expect((await nurse<Filters>('/api/pathway/filter')).body.items.length).toBe(20)
})
