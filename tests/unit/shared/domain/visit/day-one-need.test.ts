import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { dayOneLines, dayOneNeed, otherwiseChoices } from '#shared/domain/visit/day-one-need'
import type { DayOneFacts } from '#shared/domain/visit/day-one-need'

/** Everything known, nothing special. Surgery on Friday 27 March 2026, 15:00, two nights before the clocks go forward. */
const plain: DayOneFacts = {
  operatedAt: new Date('2026-03-27T15:00:00Z'), complications: [], woundConcern: false, oedemaAtEnd: false, viscoelasticLeft: false, complexOrCombined: false, denseNucleus: false, ultrasoundTimesMedian: 1, glaucomaOrHypertension: false, preoperativeIopMmHg: 15,
  pseudoexfoliation: false, uveitis: false, onlyEye: false, opticNerveOrVein: false, endothelialCellsPerMm2: 2400, bothEyesSameDay: false, canReportSymptoms: true, canUseDrops: true, canReachEmergencyCare: true, surgeonRequest: false,
}

/** One row for each line of the policy: the fact that fires it, alone (the reference table of who must be seen; sources stand with the lines). */
const fires: [string, Partial<DayOneFacts>][] = [
  ['complication', { complications: ['posterior capsule rupture'] }], ['wound-concern', { woundConcern: true }], ['oedema-at-end', { oedemaAtEnd: true }], ['viscoelastic-left', { viscoelasticLeft: true }], ['complex-surgery', { complexOrCombined: true }],
  ['dense-nucleus', { denseNucleus: true }], ['dense-nucleus', { ultrasoundTimesMedian: 2 }], ['pressure', { glaucomaOrHypertension: true }], ['pressure', { preoperativeIopMmHg: 23 }], ['pseudoexfoliation', { pseudoexfoliation: true }], ['uveitis', { uveitis: true }], ['only-eye', { onlyEye: true }],
  ['nerve-or-vein', { opticNerveOrVein: true }], ['endothelium', { endothelialCellsPerMm2: 1499 }], ['both-eyes', { bothEyesSameDay: true }], ['cannot-report', { canReportSymptoms: false }], ['cannot-use-drops', { canUseDrops: false }], ['no-emergency-access', { canReachEmergencyCare: false }], ['surgeon-request', { surgeonRequest: true }],
]
const quiet: Partial<DayOneFacts>[] = [{ ultrasoundTimesMedian: 1.9 }, { preoperativeIopMmHg: 22 }, { endothelialCellsPerMm2: 1500 }, { surgeonRequest: undefined }]

describe('who needs a day-one check in person', () => {
  test.each(fires)('%s is required with %j, within 24 hours', (id, change) => {
    const need = dayOneNeed({ ...plain, ...change }, 'telephone')
    expect(need).toMatchObject({ isRequired: true, check: 'in-person', unknown: [], latestSafeAt: new Date('2026-03-28T15:00:00Z') })
    expect(need.reasons.map(reason => reason.id)).toEqual([id])
    expect(need.reasons[0]?.source.length).toBeGreaterThan(0)
  })

  test('every line has its row', () => {
    expect(new Set(fires.map(([id]) => id))).toEqual(new Set(dayOneLines.map(each => each.id)))
  })

  test.each(quiet)('%j alone requires nothing', (change) => {
    expect(dayOneNeed({ ...plain, ...change }, 'telephone')).toMatchObject({ isRequired: false, reasons: [], unknown: [] })
  })

  test('where nothing is required the site chooses, and within 48 hours', () => {
    expect(dayOneNeed(plain, 'telephone')).toMatchObject({ check: 'telephone', latestSafeAt: new Date('2026-03-29T15:00:00Z'), constraints: { inPerson: false } })
    expect(dayOneNeed(plain, 'open-access')).toMatchObject({ check: 'open-access', latestSafeAt: null })
    expect(dayOneNeed(plain)).toMatchObject({ check: 'in-person', isRequired: false })
  })

  test.each(Object.keys(plain).filter(name => name !== 'operatedAt' && name !== 'surgeonRequest'))('not knowing %s counts as required, and says so', (name) => {
    const need = dayOneNeed({ ...plain, [name]: undefined }, 'telephone')
    expect(need).toMatchObject({ isRequired: true, check: 'in-person', reasons: [] })
    expect(need.unknown).toHaveLength(1)
  })

  test('one fact of a pair is enough to require it although the other is unknown', () => {
    expect(dayOneNeed({ ...plain, denseNucleus: true, ultrasoundTimesMedian: undefined })).toMatchObject({ reasons: [{ id: 'dense-nucleus' }], unknown: [] })
  })

  test('where and when follow from the lines and from the patient', () => {
    expect(dayOneNeed({ ...plain, complications: ['vitreous loss'] }).constraints).toMatchObject({ atHospital: true, beforeNoon: false })
    expect(dayOneNeed({ ...plain, onlyEye: true }).constraints).toMatchObject({ atHospital: false, beforeNoon: true })
    expect(dayOneNeed({ ...plain, bothEyesSameDay: true, needsTransport: true, interpreterLanguage: 'Polish' }).constraints).toEqual({ inPerson: true, atHospital: false, beforeNoon: false, transport: true, interpreterLanguage: 'Polish', fellowEyeSameDay: true })
    expect(dayOneNeed({ ...plain, mustBeBeforeNoon: true }).constraints.beforeNoon).toBe(true)
  })
})

describe('the latest safe time', () => {
  // Computed dates of the reference: surgery 28 March 2026 15:00 plus 24 elapsed hours is 29 March 16:00 local; in autumn 24 October 15:00 gives 25 October 14:00 local.
  test('counts elapsed hours over both clock changes', () => {
    expect(dayOneNeed({ ...plain, onlyEye: true, operatedAt: new Date('2026-03-28T15:00:00Z') }).latestSafeAt).toEqual(new Date('2026-03-29T15:00:00Z'))
    expect(dayOneNeed({ ...plain, onlyEye: true, operatedAt: new Date('2026-10-24T14:00:00Z') }).latestSafeAt).toEqual(new Date('2026-10-25T14:00:00Z'))
  })

  test('a Friday is never slid to Monday, whatever is known', () => {
    const anyFacts = fc.record(Object.fromEntries(Object.entries(plain).filter(([name]) => name !== 'operatedAt').map(([name, value]) => [name, typeof value === 'boolean' ? fc.boolean() : typeof value === 'number' ? fc.integer({ min: 0, max: 3000 }) : fc.constantFrom([], ['vitreous loss'])])), { requiredKeys: [] })
    fc.assert(fc.property(anyFacts, fc.constantFrom(...otherwiseChoices), fc.integer({ min: 8, max: 18 }), (facts, otherwise, hour) => {
      const operatedAt = new Date(Date.UTC(2026, 2, 27, hour))
      const need = dayOneNeed({ ...facts as Partial<DayOneFacts>, operatedAt }, otherwise)
      if (need.isRequired) expect(need.latestSafeAt).toEqual(new Date(operatedAt.getTime() + 24 * 3_600_000))
      if (need.latestSafeAt) expect(need.latestSafeAt.getTime()).toBeLessThan(Date.UTC(2026, 2, 29, 23))
      expect(need.latestSafeAt === null).toBe(need.check === 'open-access')
    }))
  })

  test('adding a known reason never makes a check less strict', () => {
    fc.assert(fc.property(fc.subarray(fires.map(([, change]) => change)), fc.constantFrom(...fires.map(([, change]) => change)), (some, more) => {
      const before = dayOneNeed(Object.assign({}, plain, ...some), 'open-access')
      const after = dayOneNeed(Object.assign({}, plain, ...some, more), 'open-access')
      expect(after.isRequired).toBe(true)
      expect(after.constraints.atHospital || !before.constraints.atHospital).toBe(true)
      expect(after.constraints.beforeNoon || !before.constraints.beforeNoon).toBe(true)
    }))
  })
})
