import { afterAll, beforeAll, expect, test } from 'vitest'
import { testNhsNumber } from '#tests/factories/referral'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

let product: Product
let siteId: string
beforeAll(async () => {
  product = await startProduct()
  siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
})
afterAll(() => product?.stop())

async function person(record: string, eye: 'right' | 'left', change: { identifier?: string, phone?: string, site?: string } = {}) {
  const { rows: [patient] } = await product.pool.query('insert into patients (record_number, name, birth_date, identifier, phone, alerts, site_id, created_at) values ($1, \'Ursula Penrose\', \'1943-02-01\', $2, $3, $4, $5, now()) returning id', [record, change.identifier ?? null, change.phone ?? null, JSON.stringify([{ kind: 'allergy', words: `Alert of ${record}` }]), siteId])
  const { rows: [pathway] } = await product.pool.query('insert into pathways (patient_id, eye, site_id, referred_at, stage_since) values ($1, $2, coalesce((select id from sites where code = $3), $4::uuid), now(), now()) returning id', [patient.id, eye, change.site ?? 'ferncombe', siteId])
  await product.pool.query('insert into visits (pathway_id, patient_id, site_id, kind, starts_at, booked_at) values ($1, $2, $3, \'unplanned\', now(), now())', [pathway.id, patient.id, siteId])
  await product.pool.query('insert into symptom_checks (patient_id, pathway_id, answers, at) values ($1, $2, \'{}\', now())', [patient.id, pathway.id])
  await product.pool.query('insert into attachments (patient_id, pathway_id, name, media_type, bytes, sha256, stored_as, added_at) values ($1, $2, \'a.pdf\', \'application/pdf\', 1, $3, \'x\', now())', [patient.id, pathway.id, record])
  return { id: patient.id as string, pathwayId: pathway.id as string }
}
const tables = ['pathways', 'visits', 'symptom_checks', 'attachments']
const whose = async (pathwayIds: string[]) => Object.fromEntries(await Promise.all(tables.map(async table => [table, (await product.pool.query(`select patient_id from ${table} where ${table === 'pathways' ? 'id' : 'pathway_id'} = any($1) order by ${table === 'pathways' ? 'id' : 'pathway_id'}`, [pathwayIds.toSorted()])).rows.map(row => row.patient_id as string)])))
const facts = async (ids: string[]) => (await product.pool.query('select identifier, phone, alerts, merged_into_id from patients where id = any($1) order by record_number', [ids])).rows

test('a merge moves everything of one record to the other, and taking it back restores both as they were', async () => {
  const kept = await person('MA1', 'right')
  const merged = await person('MA2', 'left', { identifier: testNhsNumber(900), phone: '+447700900111' })
  const before = [await whose([kept.pathwayId, merged.pathwayId]), await facts([kept.id, merged.id])]
  const coordinator = await signedIn(product, 'corin.vellacott')
  const done = await coordinator<{ mergeId: string }>(`/api/patient/${kept.id}/merge`, { body: { mergedId: merged.id, reason: 'Same person, asked by telephone', keptRowVersion: 1, mergedRowVersion: 1 } })
  expect(done.status).toBe(200)
  const after = await whose([kept.pathwayId, merged.pathwayId])
  for (const table of tables) expect(new Set(after[table]), table).toEqual(new Set([kept.id]))
  expect(await facts([kept.id, merged.id])).toMatchObject([{ identifier: testNhsNumber(900), phone: '+447700900111', merged_into_id: null }, { identifier: null, merged_into_id: kept.id }])
  expect((await coordinator(`/api/patient/${merged.id}`)).status).toBe(404)

  const listed = await coordinator<{ merges: { id: string, recordNumber: string }[], abilities: { canUndo: boolean } }>(`/api/patient/${kept.id}/merges`)
  expect(listed.body).toMatchObject({ merges: [{ id: done.body.mergeId, recordNumber: 'MA2' }], abilities: { canUndo: true } })
  expect((await (await signedIn(product, 'sorrel.wincanton'))(`/api/patient/${kept.id}/merges`)).status).toBe(404)

  await expect(product.pool.query('update patient_merges set reason = \'another\'')).rejects.toThrow('never changed')
  await expect(product.pool.query('update symptom_checks set patient_id = patient_id')).rejects.toThrow('never changed')
  const undone = await coordinator(`/api/patient/merge/${done.body.mergeId}/undo`, { body: { reason: 'They are sisters' } })
  expect(undone.status).toBe(200)
  expect([await whose([kept.pathwayId, merged.pathwayId]), await facts([kept.id, merged.id])]).toEqual(before)
  expect((await coordinator(`/api/patient/merge/${done.body.mergeId}/undo`, { body: { reason: 'Again' } })).status).toBe(409)
  const { rows } = await product.pool.query('select event from audit_rows where event in (\'patient.merged\', \'patient.unmerged\') and subject_id = $1 order by id', [kept.id])
  expect(rows.map(row => row.event)).toEqual(['patient.merged', 'patient.unmerged'])
})

test('what came to the kept record after the merge stays there when it is taken back', async () => {
  const kept = await person('MB1', 'right')
  const merged = await person('MB2', 'left', { phone: '+447700900112' })
  const coordinator = await signedIn(product, 'corin.vellacott')
  const done = await coordinator<{ mergeId: string }>(`/api/patient/${kept.id}/merge`, { body: { mergedId: merged.id, reason: 'Same person', keptRowVersion: 1, mergedRowVersion: 1 } })
  await product.pool.query('update patients set phone = \'+447700900999\' where id = $1', [kept.id])
  expect((await coordinator(`/api/patient/merge/${done.body.mergeId}/undo`, { body: { reason: 'Two people' } })).status).toBe(200)
  expect(await facts([kept.id, merged.id])).toMatchObject([{ phone: '+447700900999' }, { phone: '+447700900112' }])
})

test('two open pathways of one eye, a record seen differently and a second merge are refused, and nothing moves', async () => {
  const kept = await person('MC1', 'right')
  const merged = await person('MC2', 'right')
  const third = await person('MC3', 'left')
  const before = await whose([kept.pathwayId, merged.pathwayId])
  const coordinator = await signedIn(product, 'corin.vellacott')
  const body = { mergedId: merged.id, reason: 'Same person', keptRowVersion: 1, mergedRowVersion: 1 }
  const sameEye = await coordinator<{ code: string, eyes: string[] }>(`/api/patient/${kept.id}/merge`, { body })
  expect([sameEye.status, sameEye.body.code, sameEye.body.eyes]).toEqual([409, 'patient.conflict', ['Right eye']])
  expect((await coordinator(`/api/patient/${kept.id}/merge`, { body: { ...body, mergedId: third.id, keptRowVersion: 9 } })).status).toBe(409)
  expect((await coordinator(`/api/patient/${kept.id}/merge`, { body: { ...body, mergedId: kept.id } })).status).toBe(422)
  expect((await coordinator(`/api/patient/${kept.id}/merge`, { body: { ...body, reason: '' } })).status).toBe(422)
  expect(await whose([kept.pathwayId, merged.pathwayId])).toEqual(before)
  expect((await coordinator(`/api/patient/${kept.id}/merge`, { body: { ...body, mergedId: third.id } })).status).toBe(200)
  expect((await coordinator(`/api/patient/${merged.id}/merge`, { body: { ...body, mergedId: third.id, mergedRowVersion: 2 } })).status).toBe(409)
})

test('two merges of the same record at once end with one', async () => {
  const [one, two, merged] = [await person('MD1', 'right'), await person('MD2', 'right'), await person('MD3', 'left')]
  const coordinator = await signedIn(product, 'corin.vellacott')
  const answers = await Promise.all([one, two].map(kept => coordinator(`/api/patient/${kept.id}/merge`, { body: { mergedId: merged.id, reason: 'Same person', keptRowVersion: 1, mergedRowVersion: 1 } })))
  expect(answers.map(answer => answer.status).toSorted()).toEqual([200, 409])
})

test('nobody merges what they may not see or may not change', async () => {
  const kept = await person('ME1', 'right')
  const merged = await person('ME2', 'left')
  const body = { mergedId: merged.id, reason: 'Same person', keptRowVersion: 1, mergedRowVersion: 1 }
  for (const [who, status] of [['maren.oxlade', 403], ['ivo.hartnell', 403], ['petra.lanyon', 404], ['sorrel.wincanton', 404], ['bryony.askerswell', 404]] as const) expect((await (await signedIn(product, who))(`/api/patient/${kept.id}/merge`, { body })).status, who).toBe(status)
})

test('every table whose rows name a pathway with its patient follows when the pathway moves', async () => {
  const { rows } = await product.pool.query('select conrelid::regclass::text as name from pg_constraint where contype = \'f\' and confrelid = \'pathways\'::regclass and array_length(confkey, 1) = 2 and confupdtype <> \'c\'')
  expect(rows).toEqual([])
})
