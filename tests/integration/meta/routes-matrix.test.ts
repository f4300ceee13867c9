import { readdirSync } from 'node:fs'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { roleNames } from '#shared/domain/people/vocabulary'
import { startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'
import { methodOf, pathOf, routes } from '#tests/support/routes'
import type { Ids, RouteRow, Who } from '#tests/support/routes'
import { idsOf } from '#tests/support/site-ids'

/**
 * Every route × every role × own and foreign site. The table (tests/support/routes.ts) promises, for records of the caller's own site:
 * whom it allows is neither turned away nor told that there is nothing; everybody else is refused (403) or told that there is nothing (404).
 * A colleague of the same role at another site is told that there is nothing. Without a session everybody is asked to sign in.
 */
let product: Product
const ids: Record<'ferncombe' | 'tidemill', Ids> = {} as never
const cookies = new Map<string, string>()
const everybody: Who[] = [...roleNames, 'community']
const headers = { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }

beforeAll(async () => {
  product = await startProduct()
  const { rows: sites } = await product.pool.query('select id, name from sites order by name')
  const [ferncombe, tidemill] = sites as { id: string, name: string }[]
  const { rows: [practice] } = await product.pool.query('select id from practices order by name limit 1')
  ids.ferncombe = await idsOf(product.pool, ferncombe!.id, practice.id)
  ids.tidemill = { ...ids.ferncombe, site: tidemill!.id }
  for (const who of everybody) {
    for (const site of who === 'community' ? ['ferncombe'] as const : ['ferncombe', 'tidemill'] as const) {
      const email = `matrix.${who}.${site}@example.org`
      const { rows: [person] } = await product.pool.query('insert into people (name, title, email, password_hash) select $1, \'Tester\', $2, password_hash from people where email = \'maren.oxlade@example.org\' returning id', [`Matrix ${who}`, email])
      await product.pool.query('insert into roles (person_id, role, site_id, practice_id) values ($1, $2, $3, $4)', [person.id, who === 'community' ? 'optometrist' : who, who === 'community' ? null : ids[site].site, who === 'community' ? practice.id : null])
      cookies.set(`${who}.${site}`, await signIn(email))
    }
  }
})
afterAll(() => product?.stop())

async function signIn(email: string): Promise<string> {
  const answer = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers, body: JSON.stringify({ email, password: 'dawn-over-ferncombe' }) })
  expect(answer.status, `${email} signs in`).toBe(200)
  return answer.headers.get('set-cookie')?.split(';')[0] ?? ''
}

async function call(row: RouteRow, of: Ids, cookie: string, extra: Record<string, string> = headers): Promise<{ status: number, code: string }> {
  const method = methodOf(row)
  const stop = new AbortController()
  const answer = await fetch(`${product.url}${pathOf(row, of)}`, { method, headers: { ...extra, ...(cookie ? { cookie } : {}) }, body: method === 'GET' ? undefined : JSON.stringify(row.body?.(of) ?? {}), signal: stop.signal })
  // A stream never ends by itself.
  const text = answer.headers.get('content-type')?.includes('event-stream') ? '' : await answer.text()
  stop.abort()
  const code = /"code":"([^"]+)"/.exec(text)?.[1] ?? ''
  return { status: answer.status, code: `${code} ${text.slice(0, 160)}` }
}

const allows = ({ allow }: RouteRow, who: Who) => allow === 'all' || allow.split(' ').includes(who)
const staffRoutes = routes.filter(row => !row.public)

test('every route of the product is in the table, and nothing else is', () => {
  const files = (['api', 'routes'] as const).flatMap(folder => readdirSync(`server/${folder}`, { recursive: true, withFileTypes: true })
    .filter(each => each.isFile()).map(each => `${each.parentPath}/${each.name}`.replace(/^.*?server\//, '').replace(/\.ts$/, '')))
  expect(routes.map(row => row.file).sort()).toEqual(files.sort())
})

describe.each(staffRoutes.map(row => [row.file, row] as const))('%s', (_file, row) => {
  test('asks everybody to sign in first', async () => {
    expect((await call(row, ids.ferncombe, '')).status).toBe(401)
  })

  if (methodOf(row) !== 'GET') test('refuses a change that does not come from our own pages', async () => {
    const { status, code } = await call(row, ids.ferncombe, cookies.get('clinical-lead.ferncombe') ?? '', { 'content-type': 'application/json' })
    expect([status, code.split(' ')[0]]).toEqual([403, 'request.not-from-here'])
  })

  test('answers whom it allows and nobody else', async () => {
    for (const who of everybody) {
      // Signing out ends the very session that the others tests use.
      const cookie = row.file === 'api/people/sign-out.post' ? await signIn(`matrix.${who}.ferncombe@example.org`) : cookies.get(`${who}.ferncombe`) ?? ''
      const { status, code } = await call(row, ids.ferncombe, cookie)
      const turnedAway = status === 401 || status === 403 || (status === 404 && !/^theatre\.not-found.*stop/i.test(code))
      expect(`${who}: ${turnedAway ? 'turned away' : 'answered'}`, `${status} ${code}`).toBe(`${who}: ${allows(row, who) ? 'answered' : 'turned away'}`)
      expect(status, code).toBeLessThan(500)
    }
  })

  if (row.foreign !== 'own-view') test('tells a colleague of another site that there is nothing', async () => {
    for (const who of roleNames.filter(each => allows(row, each))) {
      const { status, code } = await call(row, ids.ferncombe, cookies.get(`${who}.tidemill`) ?? '')
      expect(`${who}: ${status}`, code).toBe(`${who}: ${row.foreign === 'refused' ? 403 : 404}`)
    }
  })
})
