import { afterAll, beforeAll, expect, test } from 'vitest'
import { startProduct, signedIn } from '#tests/support/product'
import type { Product } from '#tests/support/product'

let product: Product
beforeAll(async () => {
  product = await startProduct()
})
afterAll(() => product?.stop())

test('fifty parallel bookings on eight places end with eight visits and forty-two clear refusals', async () => {
  const nurse = await signedIn(product, 'maren.oxlade')
  const site = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
  const startsAt = new Date(Date.now() + 40 * 86_400_000)
  const session = (await product.pool.query('insert into clinic_sessions (site_id, kind, room, starts_at, ends_at) values ($1, \'follow-up\', \'Room 9\', $2, $3) returning id', [site, startsAt, new Date(startsAt.getTime() + 3_600_000)])).rows[0].id as string
  for (let place = 0; place < 8; place++) await product.pool.query('insert into session_places (session_id, starts_at, minutes) values ($1, $2, 10)', [session, new Date(startsAt.getTime() + place * 600_000)])
  const pathways = (await product.pool.query('select id from pathways where site_id = $1 and state = \'open\' and not exists (select 1 from visits v where v.pathway_id = pathways.id and v.kind = \'final\') limit 50', [site])).rows as { id: string }[]
  const wanted = Array.from({ length: 50 }, (_, index) => pathways[index % pathways.length]?.id)
  const kinds = ['final', 'first-week', 'unplanned']
  const answers = await Promise.all(wanted.map((pathwayId, index) => nurse('/api/visit', { body: { pathwayId, sessionId: session, kind: kinds[Math.floor(index / pathways.length)] } })))
  const booked = answers.filter(answer => answer.status === 200)
  const refused = answers.filter(answer => answer.status === 409)
  expect(booked).toHaveLength(8)
  expect(refused).toHaveLength(42)
  expect(new Set(refused.map(answer => answer.body.code))).toEqual(new Set(['visit.session-full']))
  const { rows } = await product.pool.query('select count(*)::int n from visits v join session_places p on p.id = v.place_id where p.session_id = $1', [session])
  expect(rows[0].n).toBe(8)
})

test('a caller without a session is refused before anything is parsed, in problem JSON', async () => {
  const answer = await fetch(`${product.url}/api/visit`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }, body: '{' })
  expect(answer.status).toBe(401)
  expect(answer.headers.get('content-type')).toContain('application/problem+json')
})

test('a change without our header or from a foreign page is refused', async () => {
  const bare = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: '{}' })
  const foreign = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1', 'origin': 'https://elsewhere.example' }, body: '{}' })
  expect([bare.status, foreign.status]).toEqual([403, 403])
})

test('signing cells 3+ with pain 4 raises one escalation of urgency Now and alerts the rota at once', async () => {
  const optometrist = await signedIn(product, 'ivo.hartnell')
  const day = await optometrist<{ visits: { id: string, kind: string, state: string }[] }>('/api/visit/clinic')
  const visit = day.body.visits.find(each => each.kind === 'day-one' && each.state === 'arrived')
  const findings = { painScore: 4, acuityUnaided: { logMar: 0.3, entered: '6/12' }, iopMmHg: 16, oedemaGrade: 1, cells: '3+', flare: '2+', chamberDepth: 'deep', wound: 'sealed', lensPosition: 'centred' }
  const half = await optometrist(`/api/review/${visit?.id}/sign`, { body: { findings: { painScore: 4 } } })
  expect(half.status).toBe(422)
  const signed = await optometrist<{ urgency: string, escalation: { number: number } }>(`/api/review/${visit?.id}/sign`, { body: { findings } })
  expect(signed.status).toBe(200)
  expect(signed.body.urgency).toBe('now')
  const again = await optometrist(`/api/review/${visit?.id}/sign`, { body: { findings } })
  expect(again.status).toBe(409)
  await expect.poll(() => product.fakes.store.texts.filter(text => text.to === '+447700900103').length, { timeout: 10_000 }).toBe(1)

  const surgeon = await signedIn(product, 'tobias.quillfeather')
  const list = await surgeon<{ items: { id: string, number: number, rowVersion: number, urgency: string }[] }>('/api/escalation')
  const first = list.body.items.find(each => each.number === signed.body.escalation.number)
  expect(first?.urgency).toBe('now')
  const refusedClose = await surgeon(`/api/escalation/${first?.id}/close`, { body: { words: 'Seen.', rowVersion: first?.rowVersion } })
  expect(refusedClose.status).toBe(409)
  const acknowledged = await surgeon<{ rowVersion: number }>(`/api/escalation/${first?.id}/acknowledge`, { body: { plan: 'I am ringing now', rowVersion: first?.rowVersion } })
  expect(acknowledged.status).toBe(200)
  const closed = await surgeon(`/api/escalation/${first?.id}/close`, { body: { words: 'Seen and treated.', rowVersion: acknowledged.body.rowVersion } })
  expect(closed.status).toBe(200)
})

test('a nurse of another site finds neither the visit nor its sheet', async () => {
  const elsewhere = await signedIn(product, 'sorrel.wincanton')
  const { rows } = await product.pool.query('select v.id from visits v join pathways p on p.id = v.pathway_id join sites s on s.id = p.site_id where s.code = \'ferncombe\' limit 1')
  const answer = await elsewhere(`/api/review/${rows[0].id}`)
  expect(answer.status).toBe(404)
})

test('pathways page by keyset without a gap or a repeat, and a practice sees only what is shared with it', async () => {
  const nurse = await signedIn(product, 'maren.oxlade')
  const seen: string[] = []
  let after: string | null = null
  do {
    const page: { body: { items: { id: string }[], next: string | null } } = await nurse(`/api/pathway${after ? `?after=${encodeURIComponent(after)}` : ''}`)
    seen.push(...page.body.items.map(item => item.id))
    after = page.body.next
  } while (after)
  const { rows } = await product.pool.query('select count(*)::int n from pathways where state <> \'closed\' and stage <> \'discharge\'')
  expect(new Set(seen).size).toBe(seen.length)
  expect(seen).toHaveLength(rows[0].n)

  const community = await signedIn(product, 'petra.lanyon')
  const shared = await community<{ items: { id: string }[] }>('/api/pathway')
  const { rows: theirs } = await product.pool.query('select id from pathways where practice_id is not null and stage <> \'discharge\'')
  expect(new Set(shared.body.items.map(item => item.id))).toEqual(new Set(theirs.map(row => row.id)))
  const { rows: other } = await product.pool.query('select patient_id from pathways where practice_id is null and patient_id not in (select patient_id from pathways where practice_id is not null) limit 1')
  expect((await community(`/api/patient/${other[0].patient_id}`)).status).toBe(404)
})

test('the application’s role can change neither a signed review nor the audit log', async () => {
  await expect(product.pool.query('update reviews set version = version')).rejects.toThrow('never changed')
  await expect(product.pool.query('delete from audit_rows')).rejects.toThrow('never changed')
})
