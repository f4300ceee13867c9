import { afterAll, beforeAll, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

type Caller = Awaited<ReturnType<typeof signedIn>>
interface Check {
  state: string, startedAt: string | null, endedAt: string | null, pathwayId: string, eye: string
  steps: { step: string, signedByName: string | null, answers: Record<string, string> | null }[]
  lens: { model: string, powerD: number, expiresOn: string, lot: string | null, serial: string | null, reasons: { code: string }[] } | null
  stops: { id: string, step: string, isOpen: boolean, reasons: { code: string }[], explanation: { words: string, signedByName: string } | null }[]
  abilities: { canSign: boolean, canExplain: boolean }
  code: string, fields: { field: string, code: string }[]
}

let product: Product
let nurse: Caller
let surgeon: Caller
let cases: string[]
let caseId: string

beforeAll(async () => {
  product = await startProduct()
  nurse = await signedIn(product, 'maren.oxlade')
  surgeon = await signedIn(product, 'tobias.quillfeather')
  cases = (await product.pool.query('select c.id from theatre_cases c join pathways p on p.id = c.pathway_id join sites s on s.id = p.site_id where c.state = \'planned\' and p.stage = \'surgery\' and s.code = \'ferncombe\' order by c.position')).rows.map(row => row.id as string)
})
afterAll(() => product?.stop())
/** The next case of today's list in the demo. */
function takeCase(): void {
  const next = cases.shift()
  if (!next) throw new Error('The demo holds too few cases for these tests.')
  caseId = next
}

const first = { 'name': 'agrees', 'birth-date': 'agrees', 'eye': 'agrees', 'mark': 'agrees', 'consent': 'agrees', 'allergies': 'agrees' }
const second = { team: 'agrees', again: 'agrees', antiseptic: 'agrees', expected: 'agrees' }
const third = { counts: 'agrees', implanted: 'agrees', equipment: 'agrees', recovery: 'agrees' }
const sign = (who: Caller, step: string, answers: Record<string, string>) => who<Check>(`/api/theatre/case/${caseId}/safety/${step}`, { body: { answers } })
const scan = (body: object, who = nurse) => who<Check>(`/api/theatre/case/${caseId}/lens`, { body })
const look = async (who = nurse) => (await who<Check>(`/api/theatre/case/${caseId}/safety`)).body
/** A label of the demo's lens of this power. The planned one is +21.5 D. */
async function label(powerD: number, expiry = '291231'): Promise<string> {
  const { rows } = await product.pool.query('select gtin from lens_labels where power_d = $1', [powerD])
  return `]d201${rows[0].gtin}17${expiry}10LOT7\u001D21SN${powerD * 10}`
}
const note = { operatedAt: new Date(Date.now() - 60_000).toISOString(), anaesthesia: 'Topical', incision: '2.4 mm temporal', technique: 'Divide and conquer', viscoelastics: '', complications: [], complicationWords: '', lensModel: 'Monofocal, one piece', lensPowerD: 21.5, lensDeviationExplained: '', drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 4, days: 28 }], dayOne: {} }

test('three signed steps take a case into theatre and out, and its time is kept to learn from', async () => {
  takeCase()
  expect((await look()).state).toBe('planned')
  expect((await sign(nurse, 'before-incision', second)).status).toBe(409)
  const half = await sign(nurse, 'before-anaesthesia', { name: 'agrees' })
  expect([half.status, half.body.code]).toEqual([422, 'theatre.incomplete'])
  expect(half.body.fields.map(each => each.field)).toEqual(['answers.birth-date', 'answers.eye', 'answers.mark', 'answers.consent', 'answers.allergies'])
  const began = await sign(nurse, 'before-anaesthesia', first)
  expect([began.status, began.body.state]).toEqual([200, 'in-theatre'])
  expect(began.body.startedAt).not.toBeNull()
  expect((await sign(nurse, 'before-anaesthesia', first)).body.code).toBe('theatre.already-signed')

  const unseen = await sign(nurse, 'before-incision', second)
  expect(unseen.body.fields).toEqual([expect.objectContaining({ field: 'lens', code: 'required' })])
  const held = await scan({ label: await label(21.5) })
  expect(held.body.lens).toMatchObject({ model: 'Monofocal, one piece', powerD: 21.5, expiresOn: '2029-12-31', lot: 'LOT7', serial: 'SN215', reasons: [] })
  expect((await sign(surgeon, 'before-incision', second)).status).toBe(200)
  const ended = await sign(nurse, 'before-leaving', third)
  expect(ended.body.steps.map(each => each.signedByName)).toEqual(['Maren Oxlade', 'Tobias Quillfeather', 'Maren Oxlade'])
  expect(ended.body.endedAt).not.toBeNull()
  await expect(product.pool.query('update safety_steps set answers = \'{}\' where case_id = $1', [caseId])).rejects.toThrow('never changed')

  expect((await surgeon(`/api/theatre/pathway/${ended.body.pathwayId}/note`, { body: note })).status).toBe(200)
  expect((await look()).state).toBe('done')
  expect((await scan({ label: await label(21.5) })).status).toBe(409)
})

test('a lens of another power stops the case: no step and no note is signed until a surgeon explains it', async () => {
  takeCase()
  await sign(nurse, 'before-anaesthesia', first)
  const wrong = await scan({ label: await label(22.5) })
  expect(wrong.status).toBe(200)
  expect(wrong.body.stops).toEqual([expect.objectContaining({ isOpen: true, step: 'before-incision', reasons: [expect.objectContaining({ code: 'lens-power' })] })])
  const [stop] = wrong.body.stops
  expect((await sign(nurse, 'before-incision', second)).body.code).toBe('theatre.requirements-unmet')
  const signed = await surgeon<{ code: string, stops: { id: string }[] }>(`/api/theatre/pathway/${wrong.body.pathwayId}/note`, { body: note })
  expect([signed.status, signed.body.code, signed.body.stops.length]).toEqual([409, 'theatre.requirements-unmet', 1])

  const explain = (who: Caller, words: string) => who<Check>(`/api/theatre/case/${caseId}/explain`, { body: { stopId: stop!.id, words } })
  expect((await explain(nurse, 'It will do')).status).toBe(403)
  expect((await explain(surgeon, '')).status).toBe(422)
  expect((await look()).stops[0]!.isOpen).toBe(true)
  expect((await explain(surgeon, 'Planned power is out of stock; agreed with the patient.')).status).toBe(200)
  expect((await explain(surgeon, 'Again')).body.code).toBe('theatre.already-signed')
  const after = await sign(nurse, 'before-incision', second)
  expect(after.status).toBe(200)
  expect(after.body.steps[1]!.answers).toMatchObject({ lens: 'differs' })
  expect(after.body.stops[0]).toMatchObject({ isOpen: false, explanation: { signedByName: 'Tobias Quillfeather' } })
})

test('an expired lens and another model stop the case; the right lens held up instead lets it go on', async () => {
  takeCase()
  await sign(nurse, 'before-anaesthesia', first)
  expect((await scan({ label: await label(21.5, '200101') })).body.stops.at(-1)).toMatchObject({ isOpen: true, reasons: [expect.objectContaining({ code: 'lens-expired' })] })
  const other = await scan({ label: '', typed: { model: 'Toric, plate', powerD: 21.5, expiresOn: '2031-01-31' } })
  expect(other.body.stops.map(each => each.isOpen)).toEqual([false, true])
  expect(other.body.lens?.reasons.map(each => each.code)).toEqual(['lens-model'])
  const right = await scan({ label: `(01)${(await product.pool.query('select gtin from lens_labels where power_d = 21.5')).rows[0].gtin}(17)300600(10)L9` })
  expect(right.body.lens).toMatchObject({ expiresOn: '2030-06-30', reasons: [] })
  expect(right.body.stops.every(each => !each.isOpen)).toBe(true)
  expect((await sign(nurse, 'before-incision', second)).status).toBe(200)
})

test('a label that cannot be read changes nothing and says what is wrong; a number that is not known asks for the box', async () => {
  takeCase()
  const before = (await product.pool.query('select count(*)::int n from lens_scans')).rows[0].n
  const spoilt = await scan({ label: (await label(21.5)).replace('0200000', '0200001') })
  expect([spoilt.status, spoilt.body.code, spoilt.body.fields[0]?.field, spoilt.body.fields[0]?.code]).toEqual([422, 'theatre.label-invalid', 'label', 'check-digit'])
  const unknown = await scan({ label: '0109506000134352172912311' })
  expect(unknown.status).toBe(422)
  const strange = await scan({ label: '010950600013435217291231' })
  expect([strange.status, strange.body.code]).toEqual([422, 'theatre.label-unknown'])
  expect((await scan({ label: '' })).body.fields[0]).toMatchObject({ field: 'label' })
  expect((await scan({ label: '', typed: { model: 'M', powerD: 90, expiresOn: 'soon' } })).body.fields.map(each => each.field)).toEqual(['typed.model', 'typed.powerD', 'typed.expiresOn'])
  expect((await product.pool.query('select count(*)::int n from lens_scans')).rows[0].n).toBe(before)
  const typed = await scan({ label: '010950600013435217291231', typed: { model: 'Monofocal, one piece', powerD: 21.5, expiresOn: '2029-12-31' } })
  expect(typed.body.lens).toMatchObject({ powerD: 21.5, reasons: [] })

  const coordinator = await signedIn(product, 'corin.vellacott')
  expect((await look(coordinator)).abilities).toEqual({ canSign: false, canExplain: false })
  expect((await sign(coordinator, 'before-anaesthesia', first)).status).toBe(403)
  for (const who of ['sorrel.wincanton', 'petra.lanyon', 'ivo.hartnell', 'bryony.askerswell']) {
    const caller = await signedIn(product, who)
    expect((await caller(`/api/theatre/case/${caseId}/safety`)).status).toBe(404)
    expect((await scan({ label: await label(21.5) }, caller)).status).toBe(404)
  }
})

test('a patient who names another eye stops the case, and answering again does not lift it', async () => {
  takeCase()
  const stopped = await sign(nurse, 'before-anaesthesia', { ...first, eye: 'differs' })
  expect(stopped.body.state).toBe('planned')
  expect(stopped.body.stops).toEqual([expect.objectContaining({ isOpen: true, reasons: [expect.objectContaining({ code: 'eye' })] })])
  expect((await sign(nurse, 'before-anaesthesia', first)).status).toBe(409)
  expect((await surgeon<Check>(`/api/theatre/case/${caseId}/explain`, { body: { stopId: stopped.body.stops[0]!.id, words: 'Misheard; asked again with the interpreter, the eye agrees.' } })).status).toBe(200)
  expect((await sign(nurse, 'before-anaesthesia', first)).body.state).toBe('in-theatre')
  await scan({ label: await label(21.5) })
  const unprepared = await sign(nurse, 'before-incision', { ...second, antiseptic: 'differs' })
  expect(unprepared.body.stops.at(-1)).toMatchObject({ isOpen: true, reasons: [expect.objectContaining({ code: 'antiseptic' })] })
  expect((await sign(nurse, 'before-incision', { ...second, antiseptic: 'differs' })).body.stops).toHaveLength(2)
  const putRight = await sign(nurse, 'before-incision', second)
  expect(putRight.body.stops.every(each => !each.isOpen)).toBe(true)
})

test('a printed list spells out the eye, names lens and power, is a PDF on request, and is for the people of that theatre', async () => {
  const { rows } = await product.pool.query('select c.list_id from theatre_cases c join pathways p on p.id = c.pathway_id join sites s on s.id = p.site_id where s.code = \'ferncombe\' and c.state <> \'cancelled\' limit 1')
  const path = `/api/theatre/list/${rows[0].list_id}`
  const list = await nurse<{ cases: { eye: string, lens: { model: string, powerD: number } }[] }>(path)
  expect(list.body.cases[0]).toMatchObject({ eye: expect.stringMatching(/^(right|left)$/), lens: { model: 'Monofocal, one piece', powerD: 21.5 } })
  const session = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }, body: JSON.stringify({ email: 'maren.oxlade@example.org', password: 'dawn-over-ferncombe' }) })
  const cookie = session.headers.get('set-cookie')?.split(';')[0] ?? ''
  const pdf = await fetch(`${product.url}${path}/pdf`, { headers: { cookie } })
  const bytes = Buffer.from(await pdf.arrayBuffer())
  expect(pdf.headers.get('content-type')).toBe('application/pdf')
  expect(bytes.subarray(0, 5).toString()).toBe('%PDF-')
  expect(bytes.length).toBeGreaterThan(5_000)
  expect(bytes.includes('NunitoSans')).toBe(true)
  for (const who of ['sorrel.wincanton', 'petra.lanyon', 'ivo.hartnell', 'bryony.askerswell']) expect((await signedIn(product, who).then(caller => caller(`${path}/pdf`))).status).toBe(404)
  expect((await fetch(`${product.url}${path}/pdf`)).status).toBe(401)
})
