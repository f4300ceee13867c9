import fc from 'fast-check'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'
import { methodOf, pathOf, routes } from '#tests/support/routes'
import type { Ids } from '#tests/support/routes'
import { idsOf } from '#tests/support/site-ids'

/** Hostile input at every route (an address beyond 16 kB is refused by Node itself, before us): never a 500, always a problem that says what and where, and nothing changed where it was refused. */
const perRoute = 40
const seed = 20_261_201
let product: Product
let ids: Ids
let cookies: string[]
let asked = 0

beforeAll(async () => {
  // Without the worker nothing but these requests changes a row.
  product = await startProduct({ DAWNWARD_WORKER: 'none', DAWNWARD_RATE_SCALE: '5000' })
  const { rows: [site] } = await product.pool.query('select id from sites where name like \'Ferncombe%\'')
  const { rows: [practice] } = await product.pool.query('select id from practices order by name limit 1')
  ids = await idsOf(product.pool, site.id, practice.id)
  cookies = await Promise.all(['leopold.strake', 'maren.oxlade'].map(async (who) => {
    const answer = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }, body: JSON.stringify({ email: `${who}@example.org`, password: 'dawn-over-ferncombe' }) })
    return answer.headers.get('set-cookie')?.split(';')[0] ?? ''
  }))
  await signedIn(product, 'leopold.strake')
})
afterAll(() => product?.stop())

const words = fc.oneof(
  fc.constantFrom('', ' ', 'a', '\0', '\u0000x', '\uD800', '\uFFFF', '<script>alert(1)</script>', '\'; drop table patients; --', '${7*7}', '../../etc/passwd', '%00', 'null', 'NaN', '-0', '1e400', '2026-02-30', '9999-12-31T23:59:60Z', '00000000-0000-0000-0000-000000000000'),
  fc.string({ maxLength: 60, unit: 'binary' }), fc.constantFrom('x'.repeat(5_000), 'ü'.repeat(20_000)),
)
const hostile: fc.Arbitrary<unknown> = fc.oneof(
  words, fc.constantFrom(null, true, false, 0, -1, 1.5, 1e308, -1e308, Number.MAX_SAFE_INTEGER, 2 ** 31, 2 ** 53),
  fc.double({ noNaN: true }), fc.constantFrom([], {}, [[[[[[]]]]]], { a: { b: { c: {} } } }, { length: 1 }, Array.from({ length: 10_000 }, () => 1)), fc.anything({ maxDepth: 3 }),
)

/** The good body with one to three of its values, at any depth, replaced, dropped or joined by an unknown one; or something else altogether. */
function spoiled(good: unknown): fc.Arbitrary<unknown> {
  const spots = placesOf(good)
  if (!spots.length) return hostile
  return fc.oneof({ weight: 5, arbitrary: fc.array(fc.tuple(fc.constantFrom(...spots), fc.oneof(hostile.map(value => ({ value })), fc.constant(undefined))), { minLength: 1, maxLength: 3 }).map(changes => changes.reduce((body, [path, change]) => replaced(body, path, change), structuredClone(good))) }, { weight: 1, arbitrary: hostile }, { weight: 1, arbitrary: fc.tuple(words, hostile).map(([key, value]) => ({ ...good as object, [key || 'extra']: value })) })
}
function placesOf(value: unknown, path: string[] = []): string[][] {
  if (typeof value !== 'object' || value === null) return []
  return Object.entries(value).flatMap(([key, inner]) => [[...path, key], ...placesOf(inner, [...path, key])])
}
function replaced(body: unknown, path: string[], change: { value: unknown } | undefined): unknown {
  let here = body as Record<string, unknown>
  for (const key of path.slice(0, -1)) {
    if (typeof here[key] !== 'object' || here[key] === null) return body
    here = here[key] as Record<string, unknown>
  }
  const last = path.at(-1)!
  if (change) here[last] = change.value
  else Reflect.deleteProperty(here, last)
  return body
}
/** As JSON, or as the broken thing that cannot be JSON. */
function sent(body: unknown): string {
  try {
    return JSON.stringify(body, (_key, value: unknown) => typeof value === 'bigint' ? String(value) : value) ?? 'undefined'
  }
  catch {
    // A circle: sent as broken JSON instead.
    return '{"a":'
  }
}

/** A sum over every row of every table that a refused request could touch. Sessions note that they were seen, and looking at a patient is logged. */
async function stateOfAll(): Promise<string> {
  const { rows } = await product.pool.query('select table_name as name from information_schema.tables where table_schema = \'public\' and table_type = \'BASE TABLE\' and table_name not in (\'sessions\', \'rate_limits\', \'audit_rows\') order by 1')
  const sums = await Promise.all(rows.map(async ({ name }: { name: string }) => `${name}:${(await product.pool.query(`select count(*) || '/' || coalesce(sum(hashtextextended(t::text, 0)), 0) as sum from "${name}" t`)).rows[0].sum}`))
  return sums.join('\n')
}

async function ask(path: string, method: string, body: string | undefined, cookie: string) {
  asked++
  const answer = await fetch(`${product.url}${path}`, { method, headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1', cookie }, body })
  const text = await answer.text()
  const told = `${method} ${path} ${body?.slice(0, 300) ?? ''} -> ${answer.status} ${text.slice(0, 300)}`
  expect(answer.status, told).toBeLessThan(500)
  expect(text, told).not.toMatch(/\bat .*\.m?js:\d+|node_modules|drizzle|select .* from/i)
  if (answer.status >= 400 && path.startsWith('/api/')) expect(answer.headers.get('content-type'), told).toContain('application/problem+json')
  return answer.status
}

const apiRoutes = routes.filter(row => row.file.startsWith('api/') && !row.file.startsWith('api/demo/') && row.file !== 'api/people/sign-out.post')

describe.each(apiRoutes.map(row => [row.file, row] as const))('%s', (_file, row) => {
  test('refuses hostile input in words, and changes nothing', async () => {
    const method = methodOf(row)
    const cases = method === 'GET'
      ? fc.sample(fc.record({ key: fc.constantFrom('siteId', 'date', 'find', 'after', 'stage', 'before', 'limit', 'kind', 'days', 'show', 'x'), value: words }), { numRuns: 12, seed }).map(({ key, value }) => ({ path: `${pathOf(row, ids)}${pathOf(row, ids).includes('?') ? '&' : '?'}${key}=${encodeURIComponent(value.toWellFormed().slice(0, 1_200))}`, body: undefined }))
      : fc.sample(spoiled(row.body?.(ids) ?? {}), { numRuns: perRoute, seed }).map(body => ({ path: pathOf(row, ids), body: sent(body) }))
    let before = await stateOfAll()
    for (const [index, { path, body }] of cases.entries()) {
      const status = await ask(path, method, body, cookies[index % cookies.length] ?? '')
      // What was spoiled may still be good input; then a change is right, and the next ones are compared with it.
      if (status < 400) before = await stateOfAll()
    }
    expect(await stateOfAll()).toBe(before)
  })

  test('refuses ids that are none', async () => {
    const own = pathOf(row, ids)
    const id = Object.values(ids).find(each => own.includes(each)) ?? 'aaaaaaaaaaaaaaaaaaaaaaaa'
    // A link that is none answers like one that is locked: it tells nobody which exist.
    if (!own.includes(id) || row.public) return
    const before = await stateOfAll()
    for (const bad of ['x', '0', '%00', '..%2f..%2fetc', '00000000-0000-0000-0000-000000000000', `${id}'`, 'ü'.repeat(300), '%E0%A4%A', ids.site]) {
      const status = await ask(own.replace(id, bad), methodOf(row), methodOf(row) === 'GET' ? undefined : sent(row.body?.(ids) ?? {}), cookies[0] ?? '')
      expect(`${bad}: ${status >= 400}`).toBe(`${bad}: true`)
    }
    expect(await stateOfAll()).toBe(before)
  })
})

test('more than two thousand requests were sent', () => {
  expect(asked).toBeGreaterThan(2_000)
})
