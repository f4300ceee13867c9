import { readFileSync } from 'node:fs'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { csvHeader, csvLineOf, testNhsNumber } from '#tests/factories/referral'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'
import { fileSender } from '#tests/support/send-file'

interface Rows { rows: { line: number, fate: string, problems: { field: string, message: string }[] }[], next: number | null }
let product: Product
let siteId: string
beforeAll(async () => {
  product = await startProduct()
  siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
})
afterAll(() => product?.stop())

const count = async (table: string) => (await product.pool.query(`select count(*)::int n from ${table}`)).rows[0].n as number
const file = (...lines: string[]) => [csvHeader, ...lines].join('\n')
const send = async (text: string | Uint8Array, who = 'corin.vellacott') => (await fileSender(product, who))(`/api/referral/import?siteId=${siteId}`, { body: text, type: 'text/csv', name: 'clinic.csv' })

test('a dry run says the fate of every line and makes nobody; the commit takes every good line over once', async () => {
  const known = { name: 'Hester Wyndlow', birth_date: '1941-03-04', identifier: testNhsNumber(1) }
  await product.pool.query('insert into patients (record_number, name, birth_date, identifier, site_id, created_at) values (\'TC1\', $1, $2, $3, $4, now())', [known.name, known.birth_date, known.identifier, siteId])
  await product.pool.query('insert into pathways (patient_id, eye, site_id, referred_at, stage_since) select id, \'left\', site_id, now(), now() from patients where record_number = \'TC1\'')
  const before = [await count('patients'), await count('pathways')]
  const sent = await send(file(
    csvLineOf(1), csvLineOf(2, { eye: 'both' }),
    csvLineOf(3, { ...known, eye: 'right' }), csvLineOf(4, { ...known, eye: 'left', name: 'Hester  Wyndlow' }),
    csvLineOf(5, { name: known.name, birth_date: known.birth_date }),
    csvLineOf(6, { identifier: '9434765918' }), csvLineOf(7, { eye: 'middle' }), csvLineOf(8, { birth_date: '31/02/1950' }), csvLineOf(9, { telephone: '12' }), csvLineOf(10, { birth_date: '2999-01-01' }),
    csvLineOf(1, { reason: 'The same again' }), 'too,few,cells',
  ))
  expect(sent.status).toBe(200)
  expect(sent.body).toMatchObject({ state: 'checked', rowsDone: 12, fates: { 'new': 2, 'new-pathway': 1, 'duplicate': 3, 'error': 6 } })
  expect([await count('patients'), await count('pathways')]).toEqual(before)
  const coordinator = await signedIn(product, 'corin.vellacott')
  const { body } = await coordinator<Rows>(`/api/referral/import/${sent.body.id}`)
  expect(body.rows.map(row => [row.line, row.fate, row.problems[0]?.field])).toEqual([
    [2, 'new', undefined], [3, 'new', undefined], [4, 'new-pathway', undefined], [5, 'duplicate', 'name'], [6, 'duplicate', 'name'],
    [7, 'error', 'identifier'], [8, 'error', 'eye'], [9, 'error', 'birth_date'], [10, 'error', 'telephone'], [11, 'error', 'birth_date'], [12, 'duplicate', 'name'], [13, 'error', '(line)'],
  ])
  const done = await coordinator(`/api/referral/import/${sent.body.id}/commit`, { body: {} })
  expect(done.body).toMatchObject({ state: 'committed', pathwayCount: 4 })
  expect([await count('patients'), await count('pathways')]).toEqual([(before[0] ?? 0) + 2, (before[1] ?? 0) + 4])
  expect((await coordinator(`/api/referral/import/${sent.body.id}/commit`, { body: {} })).status).toBe(409)
  const { rows } = await product.pool.query('select count(*)::int n from pathways w join referrals r on r.pathway_id = w.id join pathway_events e on e.pathway_id = w.id where r.source = \'csv\'')
  expect(rows[0].n).toBe(4)
})

test('a file in which somebody was added meanwhile is refused whole', async () => {
  const sent = await send(file(csvLineOf(101), csvLineOf(102)))
  await product.pool.query('insert into patients (record_number, name, birth_date, site_id, created_at) values (\'TC2\', \'Orla102 Copperdene\', $1, $2, now())', [csvLineOf(102).split(',')[1], siteId])
  const before = await count('patients')
  const coordinator = await signedIn(product, 'corin.vellacott')
  const answer = await coordinator<{ code: string, lines: number[] }>(`/api/referral/import/${sent.body.id}/commit`, { body: {} })
  expect([answer.status, answer.body.code, answer.body.lines]).toEqual([409, 'referral.stale', [3]])
  expect(await count('patients')).toBe(before)
})

test('what is no file of referrals is refused with its reason', async () => {
  const cases: [string | Uint8Array, RegExp][] = [
    ['', /no referral|name the columns/], ['name,eye\nA,right', /name the columns/], [`${csvHeader},secret\n`, /name the columns/], [`${csvHeader}\n"unclosed`, /quotation mark/],
    [Buffer.from([0xff, 0xfe, 0x41, 0x00]), /UTF-8/], [file(csvLineOf(1, { reason: 'x'.repeat(25_000) })), /too long/],
  ]
  for (const [text, why] of cases) {
    const answer = await send(text)
    expect(answer.status, String(why)).toBe(422)
    expect(answer.body.title).toMatch(why)
  }
  expect((await count('referral_import_rows'))).toBeLessThan(100)
  const wrong = await (await fileSender(product, 'corin.vellacott'))(`/api/referral/import?siteId=${siteId}`, { body: '<a/>', type: 'text/html' })
  expect(wrong.status).toBe(415)
  const large = await send(Buffer.alloc(10_500_000, 'a'))
  expect([413, 422]).toContain(large.status)
  expect((await send(Buffer.alloc(21_500_000, 'a'))).status).toBe(413)
})

test('what a spreadsheet would run is led by an apostrophe in the file of what was left behind', async () => {
  const name = '=HYPERLINK("http://x.example") Smith'
  const sent = await send(file(csvLineOf(200, { name }), csvLineOf(201, { name, birth_date: csvLineOf(200).split(',')[1] ?? '' })))
  const answer = await (await fileSender(product, 'corin.vellacott'))(`/api/referral/import/${sent.body.id}/errors`)
  expect(answer.headers.get('content-disposition')).toContain('attachment')
  expect(answer.bytes.toString()).toContain('"\'=HYPERLINK(""http://x.example"") Smith"')
})

test('nobody but a coordinator or lead of the site sends, sees or takes over a file', async () => {
  const sent = await send(file(csvLineOf(301)))
  for (const who of ['maren.oxlade', 'ivo.hartnell', 'petra.lanyon', 'bryony.askerswell', 'sorrel.wincanton']) {
    expect((await send(file(csvLineOf(302)), who)).status, who).toBe(403)
    const caller = await signedIn(product, who)
    expect((await caller('/api/referral/import')).status, who).toBe(403)
    expect((await caller(`/api/referral/import/${sent.body.id}`)).status, who).toBe(404)
    expect((await caller(`/api/referral/import/${sent.body.id}/commit`, { body: {} })).status, who).toBe(404)
  }
})

test('the sample file that is offered can be taken in', async () => {
  const sent = await send(readFileSync(new URL('../../../public/samples/referrals.csv', import.meta.url)))
  expect(sent.body.fates).toEqual({ 'new': 5, 'new-pathway': 0, 'duplicate': 0, 'error': 0 })
})

const memoryMb = () => Number(/VmRSS:\s+(\d+)/.exec(readFileSync(`/proc/${product.pid}/status`, 'utf8'))?.[1] ?? 0) / 1024

test('ten thousand lines are looked at and taken over in under thirty seconds, and memory stays flat', async () => {
  await send(file(csvLineOf(400)))
  const before = memoryMb()
  const text = file(...Array.from({ length: 10_000 }, (_, n) => csvLineOf(10_000 + n, { identifier: testNhsNumber(10_000 + n) })))
  let most = before
  const watch = setInterval(() => most = Math.max(most, memoryMb()), 50)
  const started = performance.now()
  const sent = await send(text)
  const looked = performance.now()
  expect(sent.body).toMatchObject({ state: 'checked', rowsDone: 10_000, fates: { new: 10_000 } })
  const coordinator = await signedIn(product, 'corin.vellacott')
  const done = await coordinator<{ pathwayCount: number }>(`/api/referral/import/${sent.body.id}/commit`, { body: {} })
  const taken = performance.now()
  clearInterval(watch)
  expect(done.body.pathwayCount).toBeGreaterThan(13_000)
  console.log(`10 000 lines (${(text.length / 1e6).toFixed(1)} MB): looked at in ${Math.round(looked - started)} ms, taken over in ${Math.round(taken - looked)} ms; memory ${Math.round(before)} to ${Math.round(most)} MB`)
  expect(taken - started).toBeLessThan(30_000)
  expect(most - before).toBeLessThan(150)
})

test('a process that dies in the middle of a commit has taken over nothing', async () => {
  const sent = await send(file(...Array.from({ length: 400 }, (_, n) => csvLineOf(50_000 + n))))
  const before = [await count('patients'), await count('pathways'), await count('referrals')]
  const caller = await signedIn(product, 'corin.vellacott')
  // The pathways' events are held, so that the commit stands still after its patients are written.
  const holder = await product.pool.connect()
  try {
    await holder.query('begin; lock table pathway_events in access exclusive mode')
    const broken = caller(`/api/referral/import/${sent.body.id}/commit`, { body: {} }).catch(() => 'broken')
    await expect.poll(async () => (await holder.query('select count(*)::int n from pg_locks where not granted and relation = \'pathway_events\'::regclass')).rows[0].n, { timeout: 20_000 }).toBeGreaterThan(0)
    process.kill(product.pid, 'SIGKILL')
    expect(await broken).toBe('broken')
  }
  finally {
    await holder.query('rollback')
    holder.release()
  }
  await expect.poll(async () => (await product.pool.query('select count(*)::int n from pg_stat_activity where application_name = \'dawnward\' and datname = current_database()')).rows[0].n, { timeout: 20_000 }).toBe(0)
  expect([await count('patients'), await count('pathways'), await count('referrals')]).toEqual(before)
  const { rows } = await product.pool.query('select state from referral_imports where id = $1', [sent.body.id])
  expect(rows).toEqual([{ state: 'checked' }])
})
