import type { ListPlan } from '#shared/domain/theatre/list-plan'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { learnDurations, predictDuration } from '#shared/domain/theatre/duration'
import { forecastList } from '#shared/domain/theatre/list-forecast'
import { simulateList } from '#shared/domain/theatre/list-simulation'
import { difficulties } from '#shared/domain/theatre/vocabulary'

const pastCase = fc.record({ difficulty: fc.constantFrom(...difficulties), minutes: fc.double({ min: 1, max: 600, noNaN: true }), addedTime: fc.double({ min: 0, max: 3, noNaN: true }) })
const listCase = fc.record({ id: fc.uuid(), duration: fc.record({ logMedian: fc.double({ min: 2, max: 4.5, noNaN: true }), logSpread: fc.double({ min: 0.05, max: 0.6, noNaN: true }) }) })
const anyPlan: fc.Arbitrary<ListPlan> = fc.record({ cases: fc.array(listCase, { minLength: 1, maxLength: 6 }), turnoverMinutes: fc.integer({ min: 0, max: 20 }), endMinute: fc.integer({ min: 30, max: 600 }) })

const usual = { id: 'usual', duration: { logMedian: Math.log(25), logSpread: 0.25 } }
const dense = { id: 'dense', duration: { logMedian: Math.log(75), logSpread: 0.35 } }

describe('learnDurations', () => {
  it('gives a time above 0 and a spread above 0 from any past', () => {
    fc.assert(fc.property(fc.array(pastCase, { maxLength: 40 }), fc.constantFrom(...difficulties), (past, difficulty) => {
      const { medianMinutes, meanMinutes, slowMinutes, logSpread } = predictDuration(learnDurations(past), { difficulty })
      expect([medianMinutes, meanMinutes, slowMinutes].every(value => Number.isFinite(value) && value > 0)).toBe(true)
      expect(logSpread).toBeGreaterThan(0)
      expect(slowMinutes).toBeGreaterThan(medianMinutes)
    }))
  })

  it('does not depend on the order of the past', () => {
    fc.assert(fc.property(fc.array(pastCase, { maxLength: 30 }), (past) => {
      const forwards = learnDurations(past).byDifficulty.routine
      const backwards = learnDurations([...past].reverse()).byDifficulty.routine
      expect(backwards.logMedian).toBeCloseTo(forwards.logMedian, 10)
      expect(backwards.logSpread).toBeCloseTo(forwards.logSpread, 10)
    }))
  })

  it('leaves the default behind as cases come in', () => {
    const medians = [0, 1, 5, 20, 100].map(count => predictDuration(learnDurations(Array.from({ length: count }, () => ({ difficulty: 'routine' as const, minutes: 15 }))), { difficulty: 'routine' }).medianMinutes)
    expect(medians).toEqual([...medians].sort((one, other) => other - one))
    expect(medians[0]).toBeCloseTo(25, 10)
    expect(medians.at(-1)!).toBeLessThan(15.5)
  })

  it('takes what a small pupil cost out of what the nucleus took', () => {
    const plain = learnDurations([{ difficulty: 'routine', minutes: 20 }])
    const ringed = learnDurations([{ difficulty: 'routine', minutes: 25, addedTime: 0.25 }])
    expect(ringed.byDifficulty.routine.logMedian).toBeCloseTo(plain.byDifficulty.routine.logMedian, 10)
  })

  it('adds time for hazards in the surgeon\'s own routine minutes', () => {
    const model = learnDurations([], 20)
    expect(predictDuration(model, { difficulty: 'dense', addedTime: 0.25 }).medianMinutes).toBeCloseTo(65, 10)
  })

  it.each([0, -3, 601, Number.NaN])('refuses a past case of %f minutes', (minutes) => {
    expect(() => learnDurations([{ difficulty: 'routine', minutes }])).toThrow(expect.objectContaining({ code: 'theatre.case-minutes-invalid', fields: [expect.objectContaining({ field: 'pastCases.0.minutes' })] }))
  })

  it('refuses time that is taken away', () => {
    expect(() => predictDuration(learnDurations([]), { difficulty: 'routine', addedTime: -0.1 })).toThrow(expect.objectContaining({ code: 'theatre.added-time-invalid' }))
  })
})

describe('forecastList', () => {
  it('gives moments in order and a chance between 0 and 1 for any list', () => {
    fc.assert(fc.property(anyPlan, (plan) => {
      const forecast = forecastList(plan)
      expect(forecast.overrunProbability).toBeGreaterThanOrEqual(0)
      expect(forecast.overrunProbability).toBeLessThanOrEqual(1)
      let before = 0
      for (const one of forecast.cases) {
        expect(one.expectedStartMinute).toBeGreaterThanOrEqual(before - 1e-9)
        expect(one.expectedFinishMinute).toBeGreaterThan(one.expectedStartMinute)
        before = one.expectedFinishMinute
      }
      expect(forecast.slowFinishMinute).toBeGreaterThanOrEqual(forecast.medianFinishMinute)
    }), { numRuns: 50 })
  })

  it('overruns no less with one more case, and no more with a later end', () => {
    fc.assert(fc.property(anyPlan, listCase, (plan, extra) => {
      const chance = forecastList(plan).overrunProbability
      expect(forecastList({ ...plan, cases: [...plan.cases, extra] }).overrunProbability).toBeGreaterThanOrEqual(chance - 1e-9)
      expect(forecastList({ ...plan, endMinute: plan.endMinute + 30 }).overrunProbability).toBeLessThanOrEqual(chance + 1e-9)
    }), { numRuns: 40 })
  })

  it('ends at the same time in any order when nothing has to wait', () => {
    const plan = { turnoverMinutes: 8, endMinute: 200 }
    const one = forecastList({ ...plan, cases: [usual, dense, usual] })
    const other = forecastList({ ...plan, cases: [dense, usual, usual] })
    expect(other.overrunProbability).toBeCloseTo(one.overrunProbability, 8)
    expect(other.cases[0]!.expectedFinishMinute).toBeGreaterThan(one.cases[0]!.expectedFinishMinute)
  })

  it('waits for a case that may not start early, and not when the list is late already', () => {
    expect(forecastList({ cases: [usual, { ...usual, id: 'waits', notBeforeMinute: 300 }], turnoverMinutes: 8, endMinute: 400 }).cases[1]!.expectedStartMinute).toBeCloseTo(300, 6)
    expect(forecastList({ cases: [dense, { ...usual, id: 'late', notBeforeMinute: 5 }], turnoverMinutes: 8, endMinute: 400 }).cases[1]!.expectedStartMinute).toBeGreaterThan(75)
  })

  it('knows that a case under way takes longer than it has', () => {
    const fresh = forecastList({ cases: [dense], turnoverMinutes: 8, endMinute: 200 })
    const late = forecastList({ cases: [dense], elapsedMinutes: 110, turnoverMinutes: 8, endMinute: 200 })
    expect(late.expectedFinishMinute).toBeGreaterThan(110)
    expect(late.expectedFinishMinute).toBeGreaterThan(fresh.expectedFinishMinute)
  })

  it('gives the same answer twice', () => {
    const plan = { cases: [usual, dense], turnoverMinutes: 8, endMinute: 120 }
    expect(forecastList(plan)).toEqual(forecastList(plan))
  })

  it('still answers for a case that has taken absurdly long', () => {
    const { expectedFinishMinute, overrunProbability } = forecastList({ cases: [usual], elapsedMinutes: 500, turnoverMinutes: 8, endMinute: 400 })
    expect(expectedFinishMinute).toBeGreaterThanOrEqual(500)
    expect(overrunProbability).toBe(1)
  })

  it.each([
    ['cases', { cases: [] }], ['turnoverMinutes', { turnoverMinutes: -1 }], ['endMinute', { endMinute: Number.NaN }], ['startMinute', { startMinute: 2000 }], ['elapsedMinutes', { elapsedMinutes: -5 }],
    ['cases.0.duration.logSpread', { cases: [{ id: 'sharp', duration: { logMedian: 3, logSpread: 0 } }] }], ['cases.0.notBeforeMinute', { cases: [{ ...usual, notBeforeMinute: -1 }] }],
  ])('refuses a list whose %s cannot be', (field, change) => {
    const plan = { cases: [usual], turnoverMinutes: 8, endMinute: 100, ...change }
    expect(() => forecastList(plan)).toThrow(expect.objectContaining({ code: 'theatre.list-invalid', fields: [expect.objectContaining({ field })] }))
  })
})

describe('simulateList', () => {
  const plan = { cases: [usual, dense, usual], turnoverMinutes: 8, endMinute: 150 }

  it('gives the same answer for the same seed, and another for another', () => {
    expect(simulateList(plan, 2000, 7)).toEqual(simulateList(plan, 2000, 7))
    expect(simulateList(plan, 2000, 8).expectedFinishMinute).not.toBe(simulateList(plan, 2000, 7).expectedFinishMinute)
  })
})
