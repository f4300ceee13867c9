import { readdirSync, readFileSync } from 'node:fs'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { testNhsNumber } from '#tests/factories/referral'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'
import { fileSender } from '#tests/support/send-file'

interface Entry { fullUrl?: string, resource: Record<string, unknown>, [more: string]: unknown }
interface Bundle { resourceType: string, type: string, entry: Entry[], [more: string]: unknown }

let product: Product
let siteId: string
beforeAll(async () => {
  product = await startProduct()
  siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
})
afterAll(() => product?.stop())

const post = async (body: unknown, who = 'corin.vellacott') => (await fileSender(product, who))(`/api/referral/fhir?siteId=${siteId}`, { body: typeof body === 'string' ? body : JSON.stringify(body), type: 'application/fhir+json' })
const sums = async () => (await product.pool.query('select (select count(*)::int from patients) p, (select count(*)::int from pathways) w, (select count(*)::int from referrals) r, (select count(*)::int from referral_imports) i, (select count(*)::int from referral_import_rows) l')).rows[0] as Record<string, number>

function bundle(n: number): Bundle {
  return {
    resourceType: 'Bundle', type: 'transaction', entry: [
      { fullUrl: 'urn:uuid:11111111-1111-4111-8111-111111111111', resource: { resourceType: 'Patient', identifier: [{ system: 'https://fhir.nhs.uk/Id/nhs-number', value: testNhsNumber(n) }], name: [{ use: 'official', family: `Merriweather${n}`, given: ['Tamsin'] }], telecom: [{ system: 'phone', value: '07700 900321', use: 'mobile' }], birthDate: '1949-04-17', address: [{ line: ['1 Quay Street'], city: 'Tidemill' }] }, request: { method: 'POST', url: 'Patient' } },
      { fullUrl: 'urn:uuid:22222222-2222-4222-8222-222222222222', resource: { resourceType: 'Practitioner', name: [{ family: 'Linnet', given: ['Aphra'] }], telecom: [{ system: 'email', value: 'aphra.linnet@example.org' }] } },
      { fullUrl: 'urn:uuid:33333333-3333-4333-8333-333333333333', resource: { resourceType: 'Organization', name: 'Linnet Opticians' } },
      { fullUrl: 'urn:uuid:44444444-4444-4444-8444-444444444444', resource: {
        resourceType: 'ServiceRequest', status: 'active', intent: 'order', priority: 'asap', subject: { reference: 'urn:uuid:11111111-1111-4111-8111-111111111111' }, requester: { reference: 'urn:uuid:22222222-2222-4222-8222-222222222222' }, authoredOn: '2026-08-05',
        reasonCode: [{ text: 'Glare when driving at night' }], bodySite: [{ coding: [{ system: 'http://snomed.info/sct', code: '8966001', display: 'Left eye structure' }] }],
      } },
    ],
  }
}
const of = (given: Bundle, type: string) => given.entry.find(each => each.resource.resourceType === type) as Entry

test('a bundle becomes a patient and a pathway that waits since it was written', async () => {
  const before = await sums()
  const answer = await post(bundle(1))
  expect(answer.status).toBe(200)
  expect(answer.body).toMatchObject({ patients: 1, pathwayCount: 1 })
  const { rows } = await product.pool.query('select p.name, p.phone, p.birth_date::text, p.identifier, w.eye, w.priority, w.referred_at::date::text as referred, r.referrer, r.referrer_email, r.reason, r.source from pathways w join patients p on p.id = w.patient_id join referrals r on r.pathway_id = w.id where p.name like \'Tamsin Merriweather1\'')
  expect(rows).toEqual([{ name: 'Tamsin Merriweather1', phone: '+447700900321', birth_date: '1949-04-17', identifier: testNhsNumber(1), eye: 'left', priority: 'soon', referred: '2026-08-05', referrer: 'Aphra Linnet', referrer_email: 'aphra.linnet@example.org', reason: 'Glare when driving at night', source: 'fhir' }])
  const after = await sums()
  expect([after.p, after.w, after.r]).toEqual([(before.p ?? 0) + 1, (before.w ?? 0) + 1, (before.r ?? 0) + 1])
})

test('the same bundle again is refused: this eye has an open pathway; for the other eye it is a new pathway of the known patient', async () => {
  const first = bundle(2)
  expect((await post(first)).status).toBe(200)
  const before = await sums()
  const again = await post(first)
  expect([again.status, again.body.code]).toEqual([409, 'patient.duplicate'])
  expect(await sums()).toEqual(before)
  of(first, 'ServiceRequest').resource.bodySite = [{ text: 'Right eye' }]
  expect((await post(first)).body).toMatchObject({ patients: 0, pathwayCount: 1 })
})

test('somebody of the same name and birth date is shown first, and nothing is stored', async () => {
  const known = bundle(3)
  await post(known)
  const before = await sums()
  of(known, 'Patient').resource.identifier = undefined
  const answer = await post(known)
  expect(answer.body.code).toBe('patient.duplicate')
  expect((answer.body.issue as { expression: string[] }[])[0]?.expression).toEqual(['Bundle.entry[3].resource.subject'])
  expect(await sums()).toEqual(before)
})

test('two requests for two eyes are one referral of both, in one act; as the file of a form it is the same', async () => {
  const both = bundle(4)
  const request = of(both, 'ServiceRequest')
  both.entry.push({ resource: { ...request.resource, bodySite: [{ coding: [{ system: 'http://snomed.info/sct', code: '18944008' }] }] } })
  const data = new FormData()
  data.append('file', new File([JSON.stringify(both)], 'referral.json', { type: 'application/json' }))
  const answer = await (await fileSender(product, 'corin.vellacott'))(`/api/referral/fhir?siteId=${siteId}`, { body: data })
  expect(answer.body).toMatchObject({ patients: 1, pathwayCount: 2 })
})

type Breaking = [string, (given: Bundle) => unknown, string]
const patient = (change: Record<string, unknown>) => (given: Bundle) => void Object.assign(of(given, 'Patient').resource, change)
const request = (change: Record<string, unknown>) => (given: Bundle) => void Object.assign(of(given, 'ServiceRequest').resource, change)
const broken: Breaking[] = [
  ['not a bundle', given => Object.assign(given, { resourceType: 'Patient' }), 'Bundle.resourceType'],
  ['no type', given => delete (given as Partial<Bundle>).type, 'Bundle.type'],
  ['a search result', given => Object.assign(given, { type: 'searchset' }), 'Bundle.type'],
  ['no entries', given => Object.assign(given, { entry: [] }), 'Bundle.entry'],
  ['an entry without a resource', given => given.entry.push({} as Entry), 'Bundle.entry[4].resource'],
  ['a resource of another type', given => given.entry.push({ resource: { resourceType: 'Coverage', status: 'active' } }), 'Bundle.entry[4].resource.resourceType'],
  ['an element that does not exist', patient({ nickname: 'Tam' }), 'Bundle.entry[0].resource'],
  ['an element of a later release', request({ bodyStructure: { reference: 'BodyStructure/1' } }), 'Bundle.entry[3].resource'],
  ['a birth date that is no date', patient({ birthDate: '17.04.1949' }), 'Bundle.entry[0].resource.birthDate'],
  ['a birth date of a year alone', patient({ birthDate: '1949' }), 'Bundle.entry[0].resource.birthDate'],
  ['a 31st of February', patient({ birthDate: '1949-02-31' }), 'Bundle.entry[0].resource.birthDate'],
  ['a birth date to come', patient({ birthDate: '2999-01-01' }), 'Bundle.entry[0].resource.birthDate'],
  ['no birth date', patient({ birthDate: undefined }), 'Bundle.entry[0].resource.birthDate'],
  ['names as an object', patient({ name: { family: 'Merriweather' } }), 'Bundle.entry[0].resource.name'],
  ['no name', patient({ name: undefined }), 'Bundle.entry[0].resource.name'],
  ['an empty list of names', patient({ name: [] }), 'Bundle.entry[0].resource.name'],
  ['a given name that is a number', patient({ name: [{ family: 'Merriweather', given: [7] }] }), 'Bundle.entry[0].resource.name[0].given[0]'],
  ['a gender that is no code', patient({ gender: 'F' }), 'Bundle.entry[0].resource.gender'],
  ['a kind of contact that is no code', patient({ telecom: [{ system: 'telephone', value: '1' }] }), 'Bundle.entry[0].resource.telecom[0].system'],
  ['a telephone that is too short', patient({ telecom: [{ system: 'phone', value: '12' }] }), 'Bundle.entry[0].resource.telecom'],
  ['an e-mail that is none', patient({ telecom: [{ system: 'email', value: 'at home' }] }), 'Bundle.entry[0].resource.telecom'],
  ['an NHS number that does not fit', patient({ identifier: [{ system: 'https://fhir.nhs.uk/Id/nhs-number', value: '9434765918' }] }), 'Bundle.entry[0].resource.identifier'],
  ['somebody who has died', patient({ deceasedBoolean: true }), 'Bundle.entry[0].resource.deceasedBoolean'],
  ['no request', given => Object.assign(given, { entry: given.entry.slice(0, 3) }), 'Bundle.entry'],
  ['a request without a status', request({ status: undefined }), 'Bundle.entry[3].resource.status'],
  ['a request that is revoked', request({ status: 'revoked' }), 'Bundle.entry[3].resource.status'],
  ['a request not to do it', request({ doNotPerform: true }), 'Bundle.entry[3].resource.doNotPerform'],
  ['a request of nobody', request({ subject: undefined }), 'Bundle.entry[3].resource.subject'],
  ['a request of somebody who is not in it', request({ subject: { reference: 'Patient/elsewhere' } }), 'Bundle.entry[3].resource.subject'],
  ['no eye', request({ bodySite: undefined }), 'Bundle.entry[3].resource.bodySite'],
  ['another part of the body', request({ bodySite: [{ coding: [{ system: 'http://snomed.info/sct', code: '72696002' }] }] }), 'Bundle.entry[3].resource.bodySite'],
  ['a code and words of different eyes', request({ bodySite: [{ coding: [{ system: 'http://snomed.info/sct', code: '8966001' }], text: 'Right eye' }] }), 'Bundle.entry[3].resource.bodySite'],
  ['no referrer', request({ requester: undefined }), 'Bundle.entry[3].resource.requester'],
  ['no reason', request({ reasonCode: undefined }), 'Bundle.entry[3].resource.reasonCode'],
  ['a priority that is no code', request({ priority: 'soon' }), 'Bundle.entry[3].resource.priority'],
]

test.each(broken)('a bundle with %s is refused by its path, and nothing is stored', async (_name, breakIt, path) => {
  const given = bundle(50)
  breakIt(given)
  const before = await sums()
  const answer = await post(given)
  expect(answer.status).toBe(422)
  expect(answer.headers.get('content-type')).toContain('application/problem+json')
  expect((answer.body.issue as { expression: string[] }[]).flatMap(each => each.expression)).toContain(path)
  expect(await sums()).toEqual(before)
})

test('what is not JSON, not UTF-8 or not called FHIR is refused', async () => {
  expect((await post('{"resourceType": "Bundle"')).status).toBe(422)
  expect((await post(JSON.stringify(bundle(51)).replace('Tamsin', 'Tam\\u0000sin'))).status).toBe(422)
  const xml = await (await fileSender(product, 'corin.vellacott'))(`/api/referral/fhir?siteId=${siteId}`, { body: '<Bundle/>', type: 'application/fhir+xml' })
  expect(xml.status).toBe(415)
  expect((await post('x'.repeat(2_100_000))).status).toBe(413)
})

test('the specification’s own patients come in when somebody refers their eye, or are refused by what they lack', async () => {
  const folder = new URL('../../fixtures/fhir/', import.meta.url)
  const outcomes: Record<string, unknown> = {}
  for (const name of readdirSync(folder).filter(each => each.startsWith('Patient-'))) {
    const given = bundle(60)
    given.entry[0] = { ...given.entry[0], resource: JSON.parse(readFileSync(new URL(name, folder), 'utf8')) as Record<string, unknown> }
    const answer = await post(given)
    outcomes[name] = answer.status === 200 ? 'taken in' : (answer.body.fields as { field: string }[]).map(each => each.field.replace('Bundle.entry[0].resource.', ''))
    expect([200, 409, 422], name).toContain(answer.status)
  }
  expect(outcomes['Patient-example.json']).toEqual(expect.arrayContaining(['identifier']))
})

test('only a coordinator or the lead of the site sends a bundle', async () => {
  for (const who of ['maren.oxlade', 'petra.lanyon', 'sorrel.wincanton', 'bryony.askerswell']) expect((await post(bundle(70), who)).status, who).toBe(403)
  expect((await (await signedIn(product, 'leopold.strake'))('/api/referral/import')).status).toBe(200)
})
