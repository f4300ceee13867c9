import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

type Caller = Awaited<ReturnType<typeof signedIn>>
let product: Product
let coordinator: Caller, nurse: Caller, optometrist: Caller, surgeon: Caller, community: Caller, tidemill: Caller
let siteId: string

beforeAll(async () => {
  product = await startProduct()
  ;[coordinator, nurse, optometrist, surgeon, community, tidemill] = await Promise.all(['corin.vellacott', 'maren.oxlade', 'ivo.hartnell', 'tobias.quillfeather', 'petra.lanyon', 'sorrel.wincanton'].map(who => signedIn(product, who))) as [Caller, Caller, Caller, Caller, Caller, Caller]
  siteId = (await product.pool.query('select id from sites where name like \'Ferncombe%\'')).rows[0].id
})
afterAll(() => product?.stop())

interface Page { rowVersion: number, stage: string, state: string, missing: { id: string }[], referral: { rowVersion: number }, contacts: { rowVersion: number, id: string }, biometry: { id: string, warnings: { ruleId: string }[] } | null, dayOneNeed: { inPerson: boolean } | null, visits: { id: string, kind: string, state: string, startsAt: string }[], letter: { state: string } | null }
const pageOf = async (as: Caller, id: string) => (await as<Page>(`/api/pathway/${id}`)).body
const missingOf = async (id: string) => (await pageOf(surgeon, id)).missing.map(each => each.id)
let people = 0
async function referred(eye: 'right' | 'left' = 'right', more: Record<string, unknown> = {}) {
  people++
  const added = await coordinator<{ patientId: string, pathwayIds: string[] }>('/api/patient', { body: {
    siteId, eyes: [eye],
    patient: { name: `Wilfrid Ambersley ${people}`, birthDate: `1950-02-${String(people).padStart(2, '0')}`, phone: '07700 900812' },
    referral: { referrer: 'Harbour Lane Opticians', referrerEmail: 'referrals@harbour-lane.example.org', reason: 'Blurred sight, glare at night.' }, ...more,
  } })
  expect(added.status, JSON.stringify(added.body)).toBeLessThan(300)
  return { id: added.body.pathwayIds[0]!, patientId: added.body.patientId }
}
const noFlags = { suddenLoss: false, painOrRedness: false, flashesOrFloaters: false }
const accept = async (id: string) => surgeon(`/api/referral/${id}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: (await pageOf(surgeon, id)).referral.rowVersion } })
const advance = async (as: Caller, id: string) => as<Page & { code?: string, missing?: { id: string }[] }>(`/api/pathway/${id}/advance`, { body: { rowVersion: (await pageOf(surgeon, id)).rowVersion } })

describe('one eye from referral to discharge over HTTP', () => {
  test('every stage says what is missing, refuses until it is met, and moves once it is', async () => {
    const { id } = await referred()
    expect(await missingOf(id)).toEqual(['triage-accepted', 'message-consent', 'red-flags'])
    const early = await advance(coordinator, id)
    expect(early.status).toBe(409)
    expect(early.type).toContain('application/problem+json')
    expect(early.body.code).toBe('pathway.requirements-unmet')

    expect((await nurse(`/api/referral/${id}/triage`, { body: { decision: 'accepted', redFlags: noFlags, rowVersion: 1 } })).status).toBe(403)
    expect((await accept(id)).status).toBe(200)
    const { contacts } = await pageOf(nurse, id)
    expect((await nurse(`/api/patient/${contacts.id}/contacts`, { method: 'PUT', body: { phone: '07700 900812', email: 'wilfrid@example.org', messageConsent: true, numberConfirmed: true, rowVersion: contacts.rowVersion } })).status).toBe(200)
    expect(await missingOf(id)).toEqual([])
    expect((await advance(coordinator, id)).body.stage).toBe('biometry')

    expect(await missingOf(id)).toEqual(['biometry-accepted', 'lens-plan', 'second-check', 'risk', 'consent', 'theatre-list'])
    const eye = { axialLengthMm: 23.5, axialLengthSdMm: 0.02, k1D: 43.25, k1AxisDegrees: 5, k2D: 44, k2AxisDegrees: 95, anteriorChamberDepthMm: 3.1, lensThicknessMm: 4.5, whiteToWhiteMm: 11.8 }
    const slip = await nurse<{ fields: { field: string }[] }>(`/api/biometry/${id}`, { body: { eye: { ...eye, axialLengthMm: 2.35 }, baseVersion: 0 } })
    expect(slip.status).toBe(422)
    expect(slip.body.fields.map(each => each.field)).toContain('eye.axialLengthMm')
    const fellow = { ...eye, axialLengthMm: 23.9, k1AxisDegrees: 175, k2AxisDegrees: 85 }
    const measured = await nurse<{ id: string, warnings: { ruleId: string }[] }>(`/api/biometry/${id}`, { body: { eye, fellow, baseVersion: 0, preoperativeAcuity: '6/18', preoperativeIopMmHg: 15, cctUm: 545, endothelialCellsPerMm2: 2400 } })
    expect(measured.status, JSON.stringify(measured.body)).toBe(200)
    expect(measured.body.warnings.length, 'a difference of 0.4 mm between the eyes is doubted: interocular 0.3 mm').toBeGreaterThan(0)
    expect((await nurse<{ code: string }>(`/api/biometry/${id}/accept`, { body: { biometryId: measured.body.id } })).body.code).toBe('biometry.requirements-unmet')
    for (const { ruleId } of measured.body.warnings) expect((await nurse(`/api/biometry/${id}/explain`, { body: { biometryId: measured.body.id, ruleId, words: 'Measured twice, the same.' } })).status).toBe(200)
    expect((await nurse(`/api/biometry/${id}/accept`, { body: { biometryId: measured.body.id } })).status).toBe(200)

    const plan = { biometryId: measured.body.id, model: 'Monofocal, one piece', aConstant: 118.7, powerD: 21, targetD: -0.25, predictedD: -0.2, baseVersion: 0 }
    const differs = await surgeon<{ code: string }>(`/api/biometry/${id}/lens-plan`, { body: { ...plan, powerD: 25 } })
    expect([differs.status, differs.body.code]).toEqual([422, 'biometry.explanation-needed'])
    expect((await nurse(`/api/biometry/${id}/lens-plan`, { body: plan })).status).toBe(403)
    const check = await surgeon<{ check: { predictions: { formula: string, predictedD: number }[] } }>(`/api/biometry/${id}/second-check`, { body: { ...plan, baseVersion: undefined } })
    const best = [18, 18.5, 19, 19.5, 20, 20.5, 21, 21.5, 22, 22.5]
    expect(check.body.check.predictions.length).toBe(4)
    let signed = { status: 0 }
    for (const powerD of best) {
      signed = await surgeon(`/api/biometry/${id}/lens-plan`, { body: { ...plan, powerD } })
      if (signed.status === 200) {
        plan.powerD = powerD
        break
      }
    }
    expect(signed.status, 'one half dioptre step agrees with all four formulas').toBe(200)

    expect((await surgeon(`/api/theatre/pathway/${id}/risk`, { body: { factors: { sex: 'male', glaucoma: false, cataract: 'usual', pupil: 'large', canLieFlat: true }, baseVersion: 0 } })).status).toBe(200)
    expect((await surgeon(`/api/theatre/pathway/${id}/consent`, { body: { discussed: 'Benefits, risks, alternatives and the target.', riskFigurePercent: 1.2, baseVersion: 0 } })).status).toBe(200)
    const surgeonId = (await product.pool.query('select id from people where email = \'tobias.quillfeather@example.org\'')).rows[0].id
    const soon = new Date(Date.now() + 30 * 86_400_000)
    const list = await coordinator<{ id: string }>('/api/theatre', { body: { siteId, surgeonId, room: 'Theatre 7', startsAt: soon.toISOString(), endsAt: new Date(soon.getTime() + 4 * 3_600_000).toISOString() } })
    expect(list.status, JSON.stringify(list.body)).toBe(200)
    const listed = await coordinator<{ id: string }>(`/api/theatre/list/${list.body.id}/case`, { body: { pathwayId: id } })
    expect(listed.status, JSON.stringify(listed.body)).toBe(200)
    expect(await missingOf(id)).toEqual([])
    expect((await advance(coordinator, id)).body.stage).toBe('surgery')
    const { rows: reminders } = await product.pool.query('select kind from messages where pathway_id = $1 and state = \'queued\'', [id])
    expect(reminders.map(row => row.kind)).toEqual(['surgery.reminder', 'surgery.reminder'])

    const dayOne = { woundConcern: false, oedemaAtEnd: false, viscoelasticLeft: false, complexOrCombined: false, pseudoexfoliation: false, uveitis: false, glaucomaOrHypertension: false, onlyEye: false, opticNerveOrVein: false, canReportSymptoms: true, canUseDrops: true, canReachEmergencyCare: true, bothEyesSameDay: false, surgeonRequest: true }
    const note = { operatedAt: new Date(Date.now() - 60_000).toISOString(), anaesthesia: 'Drops', incision: '2.4 mm', technique: 'Divide', energyPercentSeconds: 9, ultrasoundSeconds: 40, complications: [], lensModel: plan.model, lensPowerD: plan.powerD, drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 4, days: 28 }], dayOne }
    const other = await surgeon<{ code: string }>(`/api/theatre/pathway/${id}/note`, { body: { ...note, lensPowerD: plan.powerD + 1 } })
    expect([other.status, other.body.code]).toEqual([422, 'theatre.explanation-needed'])
    expect((await optometrist(`/api/theatre/pathway/${id}/note`, { body: note })).status).toBe(403)
    const noted = await surgeon(`/api/theatre/pathway/${id}/note`, { body: note })
    expect(noted.status, JSON.stringify(noted.body)).toBe(200)
    expect((await surgeon<{ code: string }>(`/api/theatre/pathway/${id}/note`, { body: note })).body.code).toBe('theatre.already-signed')
    expect((await pageOf(nurse, id)).dayOneNeed?.inPerson).toBe(true)
    expect(await missingOf(id)).toEqual(['first-check'])

    const toBook = await nurse<{ items: { pathwayId: string }[] }>('/api/visit/to-book')
    expect(JSON.stringify(toBook.body)).toContain(id)
    const dayOnePlace = await openPlace('day-one')
    expect((await nurse('/api/visit', { body: { pathwayId: id, placeId: dayOnePlace, kind: 'day-one' } })).status).toBe(200)
    expect((await advance(nurse, id)).body.stage).toBe('day-one')
    expect(await missingOf(id)).toEqual(['day-one-review', 'next-visit'])
  })

  test('a message of two people at once: the second is told what the pathway is now', async () => {
    const { id } = await referred()
    const { rowVersion } = await pageOf(coordinator, id)
    const hold = { reason: 'Waits for a scan', lookAgainOn: new Date(Date.now() + 20 * 86_400_000).toISOString().slice(0, 10), rowVersion }
    expect((await coordinator(`/api/pathway/${id}/hold`, { body: hold })).status).toBe(200)
    const late = await nurse<{ code: string, current: { state: string, holdReason: string } }>(`/api/pathway/${id}/hold`, { body: { ...hold, reason: 'Something else' } })
    expect([late.status, late.body.code, late.body.current.state, late.body.current.holdReason]).toEqual([409, 'pathway.stale', 'held', 'Waits for a scan'])
    expect((await advance(coordinator, id)).status).toBeGreaterThanOrEqual(400)
    const held = await pageOf(coordinator, id)
    expect((await coordinator<Page>(`/api/pathway/${id}/release`, { body: { rowVersion: held.rowVersion } })).body.state).toBe('open')
  })

  test('closing cancels what was to come and a closed pathway moves no more', async () => {
    const { rows: [live] } = await product.pool.query('select v.pathway_id as id, v.id as visit from visits v join pathways p on p.id = v.pathway_id where v.state = \'booked\' and p.state = \'open\' and p.site_id = $1 and not exists (select 1 from escalations e where e.pathway_id = p.id and e.state <> \'closed\') limit 1', [siteId])
    const { rowVersion } = await pageOf(coordinator, live.id)
    expect((await nurse(`/api/pathway/${live.id}/close`, { body: { reason: 'moved-away', words: 'Moved north', rowVersion } })).status).toBe(403)
    const closed = await coordinator<Page>(`/api/pathway/${live.id}/close`, { body: { reason: 'moved-away', words: 'Moved north', rowVersion } })
    expect(closed.body.state).toBe('closed')
    expect((await product.pool.query('select state from visits where id = $1', [live.visit])).rows[0].state).toBe('cancelled')
    expect((await product.pool.query('select count(*)::int as n from messages where pathway_id = $1 and state = \'queued\' and kind <> \'letter.sent\' and recipient_key like \'patient:%\'', [live.id])).rows[0].n).toBe(0)
    expect((await product.pool.query('select kind from pathway_events where pathway_id = $1 order by at desc, id desc limit 1', [live.id])).rows[0].kind).toBe('closed')
    for (const [move, body] of [['advance', {}], ['hold', { reason: 'No way back', lookAgainOn: '2030-01-01' }], ['reopen', { reason: 'No way back' }]] as const) {
      const refused = await surgeon<{ code: string }>(`/api/pathway/${live.id}/${move}`, { body: { ...body, rowVersion: closed.body.rowVersion } })
      expect([move, refused.status >= 400 && refused.status < 500]).toEqual([move, true])
    }
  })

  test('a practice sees a shared eye and no other, and a foreign site sees neither', async () => {
    const { id } = await referred('left')
    expect((await community(`/api/pathway/${id}`)).status).toBe(404)
    expect((await tidemill(`/api/pathway/${id}`)).status).toBe(404)
    const { rows: [practice] } = await product.pool.query('select r.practice_id as id from roles r join people p on p.id = r.person_id where p.email = \'petra.lanyon@example.org\' and r.practice_id is not null')
    const { rowVersion } = await pageOf(coordinator, id)
    expect((await coordinator(`/api/pathway/${id}/share`, { body: { practiceId: practice.id, rowVersion } })).status).toBe(200)
    expect((await community(`/api/pathway/${id}`)).status).toBe(200)
    expect((await community(`/api/pathway/${id}/hold`, { body: { reason: 'Not mine', lookAgainOn: '2030-01-01', rowVersion: rowVersion + 1 } })).status).toBe(403)
  })

  test('a patient who is here already is shown before another is made', async () => {
    const name = 'Philippa Undercliff'
    const body = (more: object) => ({ siteId, eyes: ['right'], patient: { name, birthDate: '1949-06-30' }, referral: { referrer: 'A practice', reason: 'Blurred sight' }, ...more })
    expect((await coordinator('/api/patient', { body: body({}) })).status).toBe(200)
    const again = await coordinator<{ code: string, candidates: { name: string }[] }>('/api/patient', { body: body({ patient: { name: 'philippa  undercliff', birthDate: '1949-06-30' } }) })
    expect([again.status, again.body.code]).toEqual([409, 'patient.duplicate'])
    expect(again.body.candidates.map(each => each.name)).toEqual([name])
    expect((await coordinator('/api/patient', { body: body({ confirmedNew: true }) })).status).toBe(200)
  })
})

async function openPlace(kind: string): Promise<string> {
  const { body } = await nurse<{ items: { id: string }[] }>(`/api/visit/open-places?kind=${kind}&days=3`)
  return body.items[0]?.id ?? ''
}
