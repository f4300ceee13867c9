import { afterAll, beforeAll, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

interface Item { id: string, eye: string, patient: { id: string, name: string }, referral: { rowVersion: number }, missing: string[], wait: { days: number, standing: string }, fellow: { pathwayId: string, rowVersion: number } | null, abilities: { canTriage: boolean } }
interface Page { counts: { all: number, incomplete: number, couldPass: number, passed: number }, items: Item[], next: string | null }
const noFlags = { suddenLoss: false, painOrRedness: false, flashesOrFloaters: false }

let product: Product
beforeAll(async () => {
  product = await startProduct()
})
afterAll(() => product?.stop())

async function addBothEyes(name: string) {
  const coordinator = await signedIn(product, 'corin.vellacott')
  const siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
  const added = await coordinator<{ patientId: string, pathwayIds: string[] }>('/api/patient', { body: { siteId, patient: { name, birthDate: '1945-05-06' }, eyes: ['right', 'left'], referral: { referrer: 'Harbour Lane Opticians', referrerEmail: 'referrals@harbour-lane.example.org', reason: 'Glare at night' } } })
  expect(added.status).toBe(200)
  return added.body
}

test('the queue is in the order of waiting, pages without a gap or a repeat, and says what each lacks', async () => {
  await product.pool.query('insert into patients (record_number, name, birth_date, site_id, created_at) select \'TQ\' || n, \'Queue \' || n, \'1950-01-01\', (select id from sites where code = \'ferncombe\'), now() from generate_series(1, 60) n')
  await product.pool.query('insert into pathways (patient_id, eye, site_id, referred_at, stage_since) select id, \'left\', site_id, now() - interval \'20 weeks\' + (row_number() over ()) * interval \'1 day\', now() from patients where record_number like \'TQ%\'')
  await product.pool.query('insert into referrals (pathway_id, referrer, reason) select w.id, \'Test\', \'Test\' from pathways w join patients p on p.id = w.patient_id where p.record_number like \'TQ%\'')
  const surgeon = await signedIn(product, 'tobias.quillfeather')
  const seen: Item[] = []
  let after: string | null = null
  let counts: Page['counts'] | undefined
  do {
    const page: { status: number, body: Page } = await surgeon<Page>(`/api/referral${after ? `?after=${encodeURIComponent(after)}` : ''}`)
    expect(page.status).toBe(200)
    seen.push(...page.body.items)
    counts = page.body.counts
    after = page.body.next
  } while (after)
  expect(new Set(seen.map(each => each.id)).size).toBe(seen.length)
  expect(seen).toHaveLength(counts?.all ?? -1)
  const days = seen.map(each => each.wait.days)
  expect(days).toEqual(days.toSorted((one, other) => other - one))
  expect(seen.find(each => each.patient.name === 'Queue 5')?.missing).toEqual(['red-flags', 'telephone', 'message-consent'])
  expect(counts?.incomplete).toBe(seen.filter(each => each.missing.length).length)
  expect(counts?.passed).toBe(seen.filter(each => each.wait.standing === 'passed').length)
  expect(counts?.passed).toBeGreaterThan(0)
})

test('both eyes are accepted in one act, or neither', async () => {
  const { pathwayIds: [first = '', second = ''] } = await addBothEyes('Wilmot Thornaby')
  const surgeon = await signedIn(product, 'tobias.quillfeather')
  const early = await surgeon(`/api/referral/${first}/triage`, { body: { decision: 'accepted', redFlags: { suddenLoss: false }, rowVersion: 1, fellow: { pathwayId: second, rowVersion: 1 } } })
  expect(early.status).toBe(422)
  const stale = await surgeon(`/api/referral/${first}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: 1, fellow: { pathwayId: second, rowVersion: 7 } } })
  expect(stale.status).toBe(409)
  const between = await product.pool.query('select triage_decision from referrals where pathway_id = any($1)', [[first, second]])
  expect(between.rows.map(row => row.triage_decision)).toEqual([null, null])
  const done = await surgeon(`/api/referral/${first}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: 1, fellow: { pathwayId: second, rowVersion: 1 } } })
  expect(done.status).toBe(200)
  const { rows } = await product.pool.query('select triage_decision from referrals where pathway_id = any($1)', [[first, second]])
  expect(rows.map(row => row.triage_decision)).toEqual(['accepted', 'accepted'])
})

test('another person’s eye cannot be decided along', async () => {
  const one = await addBothEyes('Leonie Marchbank')
  const other = await addBothEyes('Piers Marchbank')
  const surgeon = await signedIn(product, 'tobias.quillfeather')
  const answer = await surgeon(`/api/referral/${one.pathwayIds[0]}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: 1, fellow: { pathwayId: other.pathwayIds[1], rowVersion: 1 } } })
  expect(answer.status).toBe(422)
  const { rows } = await product.pool.query('select count(*)::int n from referrals where triage_decision is not null and pathway_id = any($1)', [[...one.pathwayIds, ...other.pathwayIds]])
  expect(rows[0].n).toBe(0)
})

test('returning writes the question to the referrer once, without the patient’s name', async () => {
  const { pathwayIds: [first = '', second = ''] } = await addBothEyes('Clemency Rudgewick')
  const surgeon = await signedIn(product, 'tobias.quillfeather')
  const done = await surgeon<{ question: string }>(`/api/referral/${first}/triage`, { body: { decision: 'returned', note: 'Has there been pain or flashes?', redFlags: {}, rowVersion: 1, fellow: { pathwayId: second, rowVersion: 1 } } })
  expect(done.body.question).toBe('queued')
  await expect.poll(() => product.fakes.mails.filter(mail => JSON.stringify(mail).includes('pain or flashes')).length, { timeout: 15_000 }).toBe(1)
  const [mail] = product.fakes.mails.filter(each => JSON.stringify(each).includes('pain or flashes'))
  expect(JSON.stringify(mail)).not.toMatch(/Clemency|Rudgewick/)
  const queue = await surgeon<Page>('/api/referral')
  expect(queue.status).toBe(200)
})

test('declining needs a reason and closes the pathway', async () => {
  const { pathwayIds: [first = ''] } = await addBothEyes('Osbert Nightgale')
  const surgeon = await signedIn(product, 'tobias.quillfeather')
  expect((await surgeon(`/api/referral/${first}/triage`, { body: { decision: 'declined', redFlags: {}, rowVersion: 1 } })).status).toBe(422)
  const done = await surgeon<{ state: string, closeReason: string }>(`/api/referral/${first}/triage`, { body: { decision: 'declined', note: 'Sight is better than it is hindered.', redFlags: {}, rowVersion: 1 } })
  expect(done.body).toMatchObject({ state: 'closed', closeReason: 'declined' })
})

test('a coordinator sees the queue and decides nothing; a nurse and an optometrist do not see it; another site’s surgeon sees nothing of it', async () => {
  const { pathwayIds: [first = ''] } = await addBothEyes('Ambrose Tillingham')
  const coordinator = await signedIn(product, 'corin.vellacott')
  const page = await coordinator<Page>('/api/referral')
  expect(page.body.items.every(each => !each.abilities.canTriage)).toBe(true)
  expect((await coordinator(`/api/referral/${first}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: 1 } })).status).toBe(403)
  for (const who of ['maren.oxlade', 'petra.lanyon', 'bryony.askerswell']) expect((await (await signedIn(product, who))('/api/referral')).status).toBe(403)
  const elsewhere = await signedIn(product, 'sorrel.wincanton')
  expect((await elsewhere(`/api/referral/${first}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: 1 } })).status).toBe(404)
})

test('an NHS number whose digits do not fit is refused where the site checks it', async () => {
  const coordinator = await signedIn(product, 'corin.vellacott')
  const siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
  const body = (identifier: string) => ({ siteId, patient: { name: 'Isolde Farthingale', birthDate: '1948-08-08', identifier }, eyes: ['right'], referral: { referrer: 'Harbour Lane Opticians', reason: 'Glare' } })
  const wrong = await coordinator<{ fields: { field: string, code: string }[] }>('/api/patient', { body: body('943 476 5918') })
  expect(wrong.status).toBe(422)
  expect(wrong.body.fields).toEqual([expect.objectContaining({ field: 'patient.identifier', code: 'check-digit' })])
  expect((await coordinator('/api/patient', { body: body('943 476 5919') })).status).toBe(200)
  const { rows } = await product.pool.query('select identifier from patients where name = \'Isolde Farthingale\'')
  expect(rows).toEqual([{ identifier: '9434765919' }])
})
