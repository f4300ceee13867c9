import { describe, expect, it } from 'vitest'
import { forecastDay, plannedSpans } from '#shared/domain/theatre/day-plan'
import type { DayCase } from '#shared/domain/theatre/day-plan'
import { lensReasons } from '#shared/domain/theatre/lens-check'
import { breachesOf, notBeforeMinute, proposeOrder } from '#shared/domain/theatre/list-breaches'
import type { BreachCase } from '#shared/domain/theatre/list-breaches'
import { openStops, questionsOf, safetySteps } from '#shared/domain/theatre/safety-check'

const list = { startsAt: '2026-10-15T07:30:00.000Z', endsAt: '2026-10-15T11:45:00.000Z' }
const planned = (id: string, minutes = 25): DayCase => ({ id, state: 'planned', plannedMinutes: minutes, duration: { logMedian: Math.log(minutes), logSpread: 0.25 }, startedAt: null, endedAt: null })
const dayBefore = '2026-10-14T12:00:00.000Z'

describe('a theatre day', () => {
  it('plans each case after the one before and the turnover', () => {
    expect(plannedSpans([planned('a', 25), planned('b', 75), planned('c', 25)])).toEqual([{ id: 'a', startMinute: 0, endMinute: 25 }, { id: 'b', startMinute: 35, endMinute: 110 }, { id: 'c', startMinute: 120, endMinute: 145 }])
  })

  it('ends later with a dense nucleus, and has no forecast without a case to come', () => {
    const cases = [planned('a'), planned('b')]
    const plain = forecastDay({ ...list, cases }, dayBefore)!
    const dense = forecastDay({ ...list, cases: [planned('a'), planned('b', 75)] }, dayBefore)!
    expect(dense.expectedFinishMinute - plain.expectedFinishMinute).toBeGreaterThan(45)
    expect(forecastDay({ ...list, cases: [] }, dayBefore)).toBeNull()
    expect(forecastDay({ ...list, cases: [{ ...planned('a'), state: 'done' }, { ...planned('b'), state: 'cancelled' }] }, dayBefore)).toBeNull()
  })

  it('cannot begin in the past, counts what is over with the time it took, and knows that the case under way takes longer than it has', () => {
    const late = forecastDay({ ...list, cases: [planned('a')] }, '2026-10-15T08:30:00.000Z')!
    expect(late.cases[0]!.expectedStartMinute).toBe(60)
    const over = { ...planned('a'), state: 'in-theatre' as const, startedAt: list.startsAt, endedAt: '2026-10-15T08:40:00.000Z' }
    expect(forecastDay({ ...list, cases: [over, planned('b')] }, '2026-10-15T08:41:00.000Z')!.cases[0]!.expectedStartMinute).toBe(80)
    const underWay = { ...planned('b'), state: 'in-theatre' as const, startedAt: list.startsAt }
    const forecast = forecastDay({ ...list, cases: [planned('a'), underWay] }, '2026-10-15T08:30:00.000Z')!
    expect(forecast.cases.map(one => one.id)).toEqual(['b', 'a'])
    expect(forecast.cases[0]!.expectedFinishMinute).toBeGreaterThan(60)
  })
})

describe('the order of a list', () => {
  // 07:30 UTC is 08:30 in London; an interpreter from 10:00 is 90 minutes into the list.
  it('changes the finish and the chance of overrun where somebody has to be waited for', () => {
    const waits = { ...planned('w'), notBeforeMinute: notBeforeMinute({ startsAt: list.startsAt, zone: 'Europe/London', anaesthetistFrom: null }, { interpreterFrom: '10:00' }) }
    expect(waits.notBeforeMinute).toBe(90)
    const others = ['a', 'b', 'c', 'd', 'e'].map(id => planned(id))
    const first = forecastDay({ ...list, cases: [waits, ...others] }, dayBefore)!
    const later = forecastDay({ ...list, cases: [...others.slice(0, 3), waits, ...others.slice(3)] }, dayBefore)!
    expect(first.cases[0]!.expectedStartMinute).toBe(90)
    expect(first.expectedFinishMinute).toBeGreaterThan(later.expectedFinishMinute + 60)
    expect(first.overrunProbability).toBeGreaterThan(later.overrunProbability + 0.3)
  })

  it('waits for the later of interpreter and anaesthetist, and for nobody who is there already', () => {
    const at = (constraints: Parameters<typeof notBeforeMinute>[1], anaesthetistFrom: string | null = '2026-10-15T08:30:00.000Z') => notBeforeMinute({ startsAt: list.startsAt, zone: 'Europe/London', anaesthetistFrom }, constraints)
    expect(at({ needsAnaesthetist: true })).toBe(60)
    expect(at({ needsAnaesthetist: true, interpreterFrom: '10:00' })).toBe(90)
    expect(at({ needsAnaesthetist: true }, null)).toBeNull()
    expect(at({ interpreterFrom: '08:30' })).toBeNull()
    expect(at({ diabetic: true })).toBeNull()
  })
})

describe('what a case needs of its place', () => {
  const one = (id: string, constraints: BreachCase['constraints'], minutes = 25): BreachCase => ({ id, patientName: id, eye: 'left', constraints, plannedMinutes: minutes, state: 'planned', endedAt: null })
  const kinds = (cases: BreachCase[], hours: { anaesthetistFrom: string | null, anaesthetistTo: string | null } = { anaesthetistFrom: null, anaesthetistTo: null }) => breachesOf({ startsAt: list.startsAt, zone: 'Europe/London', ...hours, cases }).map(breach => `${breach.caseId} ${breach.kind}`)

  // 'common practice': latex first, then diabetes.
  it('is latex allergy first, then diabetes, then the others', () => {
    expect(kinds([one('a', { latexAllergy: true }), one('b', { diabetic: true }), one('c', {})])).toEqual([])
    expect(kinds([one('a', { diabetic: true }), one('b', { latexAllergy: true }), one('c', {})])).toEqual(['b latex-first'])
    expect(kinds([one('c', {}), one('a', { latexAllergy: true, diabetic: true })])).toEqual(['a latex-first', 'a diabetic-first'])
  })

  // 07:30 UTC is 08:30 in London in October; the second case is planned for 09:05 to 09:30.
  it('is the interpreter’s hours on the clock of the site', () => {
    expect(kinds([one('a', {}), one('b', { interpreterFrom: '09:05', interpreterTo: '09:30' })])).toEqual([])
    expect(kinds([one('a', {}), one('b', { interpreterFrom: '09:06' })])).toEqual(['b interpreter'])
    expect(kinds([one('a', {}), one('b', { interpreterTo: '09:29' })])).toEqual(['b interpreter'])
  })

  it('is an anaesthetist who is there, and a lens on the shelf', () => {
    expect(kinds([one('a', { needsAnaesthetist: true })])).toEqual(['a anaesthetist'])
    expect(kinds([one('a', { needsAnaesthetist: true })], { anaesthetistFrom: list.startsAt, anaesthetistTo: list.endsAt })).toEqual([])
    expect(kinds([one('a', { lensAvailable: false }), one('b', { lensAvailable: true }), one('c', {})])).toEqual(['a lens'])
  })

  it('is not asked of a case that is over', () => {
    expect(kinds([one('c', {}), { ...one('a', { diabetic: true }), state: 'done' }])).toEqual([])
  })
})

describe('a proposed order', () => {
  const one = (id: string, constraints: BreachCase['constraints'] = {}) => ({ id, patientName: id, eye: 'right' as const, constraints, plannedMinutes: 25, state: 'planned' as const, endedAt: null, notBeforeMinute: notBeforeMinute({ startsAt: list.startsAt, zone: 'Europe/London', anaesthetistFrom: null }, constraints) })
  const propose = (cases: ReturnType<typeof one>[]) => proposeOrder({ startsAt: list.startsAt, zone: 'Europe/London', anaesthetistFrom: null, anaesthetistTo: null, cases })

  it('puts latex before diabetes before the others, and leaves the rest as it stands', () => {
    expect(propose([one('a'), one('d', { diabetic: true }), one('b'), one('l', { latexAllergy: true })])).toEqual(['l', 'd', 'a', 'b'])
  })

  it('moves a case back to the first place at which its interpreter is there', () => {
    // 25 minutes and 10 between: places begin at 08:30, 09:05, 09:40, 10:15.
    expect(propose([one('w', { interpreterFrom: '09:30' }), one('a'), one('b'), one('c')])).toEqual(['a', 'b', 'w', 'c'])
  })

  it('is none where nothing is broken or no order helps, and moves nobody who is under way', () => {
    expect(propose([one('d', { diabetic: true }), one('a')])).toBeNull()
    expect(propose([one('a', { needsAnaesthetist: true })])).toBeNull()
    expect(propose([{ ...one('a'), state: 'in-theatre' as never }, one('b'), one('d', { diabetic: true })])).toBeNull()
  })
})

describe('the lens in the room', () => {
  const plan = { model: 'Monofocal, one piece', powerD: 21.5 }
  const held = { ...plan, expiresOn: '2029-03-31' }
  const codes = (change: object, planned: typeof plan | null = plan, today = '2026-10-15') => lensReasons({ ...held, ...change }, planned, today).map(reason => reason.code)

  it('is the one planned, whatever the capitals, up to the day that stands on it', () => {
    expect(codes({})).toEqual([])
    expect(codes({ model: ' monofocal,  ONE piece' })).toEqual([])
    expect(codes({ expiresOn: '2026-10-15' })).toEqual([])
  })

  it('stops the case by model, power, date and a missing plan, and says all of them', () => {
    expect(codes({ powerD: 22 })).toEqual(['lens-power'])
    expect(codes({ powerD: -21.5 })).toEqual(['lens-power'])
    expect(codes({ model: 'Other' })).toEqual(['lens-model'])
    expect(codes({ expiresOn: '2026-10-14' })).toEqual(['lens-expired'])
    expect(codes({ model: 'Other', powerD: 20, expiresOn: '2020-01-01' })).toEqual(['lens-model', 'lens-power', 'lens-expired'])
    expect(codes({}, null)).toEqual(['lens-no-plan'])
  })
})

describe('a stop', () => {
  const stop = (code: string, scanId: string | null = null) => ({ id: code, step: 'before-incision' as const, scanId, reasons: [{ code, sentence: code }] })
  const record = { explainedStopIds: [], lastScanId: undefined, signedSteps: [] }

  it('of a lens is lifted by a surgeon’s words or by another lens held up', () => {
    expect(openStops({ ...record, stops: [stop('lens-power', 's1')], lastScanId: 's1' })).toHaveLength(1)
    expect(openStops({ ...record, stops: [stop('lens-power', 's1')], lastScanId: 's2' })).toHaveLength(0)
    expect(openStops({ ...record, stops: [stop('lens-power', 's1')], lastScanId: 's1', explainedStopIds: ['lens-power'] })).toHaveLength(0)
  })

  it('of who and which eye stays until a surgeon explains it; one that was put right is lifted by signing its step', () => {
    expect(openStops({ ...record, stops: [stop('eye')], signedSteps: ['before-incision'] })).toHaveLength(1)
    expect(openStops({ ...record, stops: [stop('antiseptic')] })).toHaveLength(1)
    expect(openStops({ ...record, stops: [stop('antiseptic')], signedSteps: ['before-incision'] })).toHaveLength(0)
  })

  it('can come of every question, and every step asks something', () => {
    for (const step of safetySteps) expect(questionsOf(step).every(question => question.stops.length > 10 && question.agrees !== question.differs)).toBe(true)
    expect(safetySteps.map(step => questionsOf(step).length)).toEqual([6, 5, 4])
  })
})
