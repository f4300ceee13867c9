import { execFile, fork } from 'node:child_process'
import { performance } from 'node:perf_hooks'
import { promisify } from 'node:util'
import autocannon from 'autocannon'
import { drizzle } from 'drizzle-orm/node-postgres'
import pg from 'pg'
import * as schema from '#server/db/schema/index'
import { listPathways } from '#server/services/pathway/list-pathways'
import type { Actor } from '#shared/domain/people/vocabulary'
import { signedIn, startProduct } from '#tests/support/product'

/** Every figure is a ratio of two sides that run in turn in this one run, or a rate on one core. Machines differ; ratios differ less. */
const run = promisify(execFile)
const median = (values: number[]) => [...values].sort((left, right) => left - right)[Math.floor(values.length / 2)] ?? 0
const lines: { what: string, ours: string, bare: string, ratio: string, goal: string }[] = []

async function rate(url: string, headers: Record<string, string> = {}): Promise<number> {
  const result = await autocannon({ url, headers, connections: 16, duration: 3 })
  if (result.non2xx || result.errors) throw new Error(`${url} answered ${result.non2xx} refusals and ${result.errors} errors`)
  return result.requests.average
}

const product = await startProduct({ DAWNWARD_WORKER: 'none', DAWNWARD_RATE_SCALE: '100000' })
const { rows: [lead] } = await product.pool.query('select p.id, p.name from people p where p.email = \'leopold.strake@example.org\'')
const { rows: roles } = await product.pool.query('select role, site_id as "siteId", practice_id as "practiceId" from roles where person_id = $1', [lead.id])
const actor: Actor = { personId: lead.id, name: lead.name, roles }
const url = product.pool.options.connectionString ?? ''

// (a) The authenticated list against the same SQL, read off the service while it runs once.
const queries: { sql: string, params: unknown[] }[] = []
const pool = new pg.Pool({ connectionString: url, max: 2 })
const seen = drizzle(pool, { schema, logger: { logQuery: (sql, params) => void queries.push({ sql, params }) } })
await listPathways({ db: seen, now: new Date(), actor }, {})
await pool.end()
const bare = fork('tests/bench/bare-server.ts', { execArgv: ['--import', 'tsx'], env: { ...process.env, DAWNWARD_BENCH_BARE: JSON.stringify({ url, queries }) } })
const barePort = await new Promise<number>(resolve => bare.once('message', port => resolve(port as number)))
const cookie = (await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }, body: JSON.stringify({ email: 'leopold.strake@example.org', password: 'dawn-over-ferncombe' }) })).headers.get('set-cookie')?.split(';')[0] ?? ''
const sides = { ours: [] as number[], bare: [] as number[] }
await rate(`${product.url}/api/pathway`, { cookie })
await rate(`http://127.0.0.1:${barePort}`)
for (let round = 0; round < 5; round++) {
  sides.ours.push(await rate(`${product.url}/api/pathway`, { cookie }))
  sides.bare.push(await rate(`http://127.0.0.1:${barePort}`))
}
bare.kill()
lines.push({ what: `authenticated pathway list, requests a second (${queries.length} queries each)`, ours: median(sides.ours).toFixed(0), bare: median(sides.bare).toFixed(0), ratio: (median(sides.ours) / median(sides.bare)).toFixed(2), goal: '0.5 or more' })

// (b) Signing a review, against one committed insert of its size.
const optometrist = await signedIn(product, 'ivo.hartnell')
const { rows: visits } = await product.pool.query('insert into visits (pathway_id, patient_id, site_id, kind, state, starts_at, booked_at) select p.id, p.patient_id, p.site_id, \'unplanned\', \'with-optometrist\', now(), now() from pathways p join sites s on s.id = p.site_id, generate_series(1, 8) where p.operated_at is not null and p.state = \'open\' and s.name like \'Ferncombe%\' limit 120 returning id')
const findings = { painScore: 1, acuityUnaided: { logMar: 0.2, entered: '6/9' }, iopMmHg: 15, iopMethod: 'applanation', oedemaGrade: 1, wound: 'sealed', chamberDepth: 'deep', cells: '1+', flare: '0', lensPosition: 'centred', redReflex: 'normal', pupil: 'round', dropsUse: 'using' }
const signing: number[] = []
const inserting: number[] = []
await product.pool.query('create table bench_rows (id serial primary key, at timestamptz not null, body jsonb not null)')
let refused = ''
for (const { id } of visits) {
  let started = performance.now()
  const answer = await optometrist<{ title?: string, detail?: string }>(`/api/review/${id}/sign`, { body: { findings } })
  signing.push(performance.now() - started)
  if (answer.status >= 300) refused = JSON.stringify(answer.body)
  started = performance.now()
  await product.pool.query('insert into bench_rows (at, body) values (now(), $1)', [JSON.stringify(findings)])
  inserting.push(performance.now() - started)
}
if (refused) throw new Error(`A review was not signed: ${refused}`)
const at = (values: number[], part: number) => [...values].sort((left, right) => left - right)[Math.floor(values.length * part)] ?? 0
lines.push({ what: 'sign a review over HTTP, ms at the median', ours: at(signing, 0.5).toFixed(1), bare: at(inserting, 0.5).toFixed(1), ratio: (at(inserting, 0.5) / at(signing, 0.5)).toFixed(2), goal: '-' })
lines.push({ what: 'sign a review over HTTP, ms at 95 of 100', ours: at(signing, 0.95).toFixed(1), bare: at(inserting, 0.95).toFixed(1), ratio: (at(inserting, 0.95) / at(signing, 0.95)).toFixed(2), goal: '-' })
await product.stop()

// (c) Texts through the whole sender, against a keep-alive loop to the same fake.
async function script(file: string): Promise<Record<string, number>> {
  // A bench that misses its goal ends with 1 and still says its figure.
  const { stdout } = await run(process.execPath, ['--import', 'tsx', `tests/bench/${file}.ts`], { maxBuffer: 10_000_000 }).catch((error: { stdout: string }) => error)
  return JSON.parse(stdout.trim().split('\n').at(-1) ?? '{}') as Record<string, number>
}
const texts = await script('messages')
lines.push({ what: 'texts a second', ours: String(texts.senderPerSecond), bare: String(texts.barePerSecond), ratio: ((texts.senderPerSecond ?? 0) / (texts.barePerSecond ?? 1)).toFixed(2), goal: '0.6 later' })

// (d) The computations, on one core.
const lens = await script('lens-power')
lines.push({ what: 'second checks of both eyes a second, four formulas', ours: String(lens.perSecond), bare: '-', ratio: '-', goal: '100000 or more' })
const rules = await script('rules')
lines.push({ what: 'the whole rule table on one review, a second', ours: String(rules.perSecond), bare: '-', ratio: '-', goal: '50000 or more' })

console.table(lines)
process.exit(0)
