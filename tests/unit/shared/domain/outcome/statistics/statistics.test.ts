import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { cusumWeight, plainCusum, riskAdjustedCusum, shiftCusum } from '#shared/domain/outcome/cusum'
import { alarmingCount, funnelLimits, placeOnFunnel } from '#shared/domain/outcome/funnel'
import { summariseErrors } from '#shared/domain/outcome/statistics'
import { assessCluster } from '#shared/domain/outcome/statistics-cluster'
import { describeProportion, exactInterval, wilsonInterval } from '#shared/domain/outcome/statistics-intervals'

const errors = fc.array(fc.double({ min: -4, max: 4, noNaN: true }), { minLength: 2, maxLength: 80 })
const counts = fc.integer({ min: 1, max: 400 }).chain(eyes => fc.tuple(fc.integer({ min: 0, max: eyes }), fc.constant(eyes)))
const chance = fc.double({ min: 0.001, max: 0.9, noNaN: true })

describe('summariseErrors', () => {
  it('agrees with sums written out for any errors', () => {
    fc.assert(fc.property(errors, (values) => {
      const summary = summariseErrors(values, [0.5], 2)
      if (summary.kind === 'too-few') throw new Error('two eyes were enough')
      const mean = values.reduce((sum, value) => sum + value, 0) / values.length
      const ranked = values.map(Math.abs).sort((one, other) => one - other)
      const half = ranked.length / 2
      expect(summary.meanD).toBeCloseTo(mean, 10)
      expect(summary.medianAbsoluteD).toBeCloseTo(ranked.length % 2 ? ranked[Math.floor(half)]! : (ranked[half - 1]! + ranked[half]!) / 2, 10)
      expect(summary.spreadD).toBeCloseTo(Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1)), 8)
    }))
  })

  // Worked by hand.
  it('of -0.5, 0.25, 0 and 1 has mean 0.1875, mean absolute 0.4375, median absolute 0.375 and spread 0.6250', () => {
    expect(summariseErrors([-0.5, 0.25, 0, 1], [0.25, 0.5, 1], 2)).toMatchObject({
      kind: 'answer', eyes: 4, meanD: 0.1875, meanAbsoluteD: 0.4375, medianAbsoluteD: 0.375, spreadD: expect.closeTo(0.625, 4),
      within: [{ limitD: 0.25, eyes: 2, percent: 50 }, { limitD: 0.5, eyes: 3, percent: 75 }, { limitD: 1, eyes: 4, percent: 100 }],
    })
  })

  it('is the same to both sides: signs turned, only the mean turns', () => {
    fc.assert(fc.property(errors, (values) => {
      const summary = summariseErrors(values, [0.5], 2)
      const turned = summariseErrors(values.map(value => -value), [0.5], 2)
      if (summary.kind === 'too-few' || turned.kind === 'too-few') throw new Error('two eyes were enough')
      expect(turned.meanD).toBeCloseTo(-summary.meanD, 10)
      expect(turned.medianAbsoluteD).toBe(summary.medianAbsoluteD)
      expect(turned.within).toEqual(summary.within)
    }))
  })

  it('counts an error of 0.1 + 0.4 as within half a dioptre', () => {
    expect(summariseErrors([0.1 + 0.4, 0.2 + 0.1 + 0.2], [0.5], 2)).toMatchObject({ within: [{ eyes: 2 }] })
  })

  it('refuses an answer from 29 eyes and from none, and gives one from 30', () => {
    expect(summariseErrors([])).toEqual({ kind: 'too-few', eyes: 0, needed: 30 })
    expect(summariseErrors(Array.from({ length: 29 }, () => 0.1))).toEqual({ kind: 'too-few', eyes: 29, needed: 30 })
    expect(summariseErrors(Array.from({ length: 30 }, () => 0.1)).kind).toBe('answer')
  })

  it('refuses an error that is not a number, by its place', () => {
    expect(() => summariseErrors([0.1, Number.NaN])).toThrow(expect.objectContaining({ code: 'outcome.value-missing', fields: [expect.objectContaining({ field: 'values.1' })] }))
  })
})

describe('intervals', () => {
  it.each([['Wilson', wilsonInterval], ['exact', exactInterval]])('of %s hold the share, lie between 0 and 1, and mirror', (_, interval) => {
    fc.assert(fc.property(counts, ([events, eyes]) => {
      const { low, high } = interval(events, eyes)
      const mirrored = interval(eyes - events, eyes)
      expect(low).toBeGreaterThanOrEqual(0)
      expect(high).toBeLessThanOrEqual(1)
      expect(low).toBeLessThanOrEqual(events / eyes + 1e-12)
      expect(high).toBeGreaterThanOrEqual(events / eyes - 1e-12)
      expect(mirrored.low).toBeCloseTo(1 - high, 6)
      expect(mirrored.high).toBeCloseTo(1 - low, 6)
    }))
  })

  it('know nothing of no eyes', () => {
    expect(wilsonInterval(0, 0)).toEqual({ low: 0, high: 1 })
    expect(exactInterval(0, 0)).toEqual({ low: 0, high: 1 })
  })

  it('grow with confidence', () => {
    expect(exactInterval(5, 100, 0.99).high).toBeGreaterThan(exactInterval(5, 100).high)
    expect(wilsonInterval(5, 100, 0.99).low).toBeLessThan(wilsonInterval(5, 100).low)
  })

  it.each([[-1, 10], [11, 10], [1.5, 10], [Number.NaN, 10], [0, -1]])('refuse %f of %f', (events, eyes) => {
    expect(() => wilsonInterval(events, eyes)).toThrow(expect.objectContaining({ code: 'outcome.count-invalid' }))
    expect(() => exactInterval(events, eyes)).toThrow(expect.objectContaining({ code: 'outcome.count-invalid' }))
  })

  it('come with the share from 30 eyes on, also of 0 events', () => {
    expect(describeProportion(0, 29)).toEqual({ kind: 'too-few', eyes: 29, needed: 30 })
    expect(describeProportion(0, 30)).toMatchObject({ kind: 'answer', events: 0, percent: 0, exact: { low: 0 } })
  })
})

describe('the funnel', () => {
  it('narrows as eyes grow, and its outer lines lie outside', () => {
    const widths = [100, 400, 1600].map((eyes) => {
      const { low, high } = funnelLimits(0.0101, eyes, 0.025)
      const outer = funnelLimits(0.0101, eyes, 0.001)
      expect(outer.high).toBeGreaterThan(high)
      expect(outer.low).toBeLessThanOrEqual(low)
      return high - low
    })
    expect(widths).toEqual([...widths].sort((one, other) => other - one))
  })

  it.each([[5, 'inside'], [12, 'above'], [14, 'far-above'], [0, 'below']])('places %i events in 500 at a target of 1.01 %% as %s', (events, place) => {
    expect(placeOnFunnel({ events, eyes: 500 }, 0.0101)).toMatchObject({ kind: 'answer', place })
  })

  it('does not hold hard eyes against whoever takes them', () => {
    expect(placeOnFunnel({ events: 12, eyes: 500 }, 0.0101)).toMatchObject({ place: 'above' })
    expect(placeOnFunnel({ events: 12, eyes: 500, expected: 12 }, 0.0101)).toMatchObject({ place: 'inside', adjustedRate: expect.closeTo(0.0101, 10) })
  })

  it('refuses a place from 49 eyes, and an expectation of nothing', () => {
    expect(placeOnFunnel({ events: 4, eyes: 49 }, 0.0101)).toEqual({ kind: 'too-few', eyes: 49, needed: 50 })
    expect(() => placeOnFunnel({ events: 1, eyes: 100, expected: 0 }, 0.0101)).toThrow(expect.objectContaining({ code: 'outcome.expected-invalid' }))
    expect(() => placeOnFunnel({ events: 1, eyes: 100 }, 0)).toThrow(expect.objectContaining({ code: 'outcome.probability-invalid' }))
  })

  it('has no alarming count where even every eye would be no surprise, and all of chance with no eyes', () => {
    expect(alarmingCount(0.5, 2, 0.025)).toBeNull()
    expect(funnelLimits(0.0101, 0, 0.025)).toEqual({ low: 0, high: 1 })
  })
})

describe('the cumulative charts', () => {
  it('rise with an event and fall without, less steeply for an event that was likely', () => {
    fc.assert(fc.property(chance, chance, (one, other) => {
      expect(cusumWeight(true, one, 2)).toBeGreaterThan(0)
      expect(cusumWeight(false, one, 2)).toBeLessThan(0)
      const [low, high] = [Math.min(one, other), Math.max(one, other)]
      expect(cusumWeight(true, high, 2)).toBeLessThanOrEqual(cusumWeight(true, low, 2))
    }))
  })

  it('never lie below 0, and hold numbers only', () => {
    fc.assert(fc.property(fc.array(fc.record({ event: fc.boolean(), probability: chance }), { maxLength: 100 }), (cases) => {
      const { points } = riskAdjustedCusum(cases, { oddsRatio: 2, limit: 3 })
      expect(points.every(({ sum, excess }) => sum >= 0 && Number.isFinite(sum) && Number.isFinite(excess))).toBe(true)
    }))
  })

  it('with one chance for all are the plain chart', () => {
    const events = [false, true, false, false, true]
    expect(plainCusum(events, 0.02, { oddsRatio: 2, limit: 3 })).toEqual(riskAdjustedCusum(events.map(event => ({ event, probability: 0.02 })), { oddsRatio: 2, limit: 3 }))
  })

  it('call nothing in control before 50 cases, but a signal a signal', () => {
    const quiet = Array.from({ length: 49 }, () => false)
    expect(plainCusum(quiet, 0.01, { oddsRatio: 2, limit: 3 })).toMatchObject({ conclusion: 'too-few', signalAt: null, needed: 50 })
    expect(plainCusum([...quiet, false], 0.01, { oddsRatio: 2, limit: 3 }).conclusion).toBe('in-control')
    expect(plainCusum(Array.from({ length: 6 }, () => true), 0.01, { oddsRatio: 2, limit: 3 })).toMatchObject({ conclusion: 'signal', signalAt: 4 })
    expect(plainCusum([], 0.01, { oddsRatio: 2, limit: 3 })).toMatchObject({ conclusion: 'too-few', points: [] })
  })

  it('stop at a case without a chance, and name it', () => {
    expect(() => riskAdjustedCusum([{ event: false, probability: 0.01 }, { event: true }], { oddsRatio: 2, limit: 3 }))
      .toThrow(expect.objectContaining({ code: 'outcome.risk-missing', fields: [expect.objectContaining({ field: 'cases.1.probability' })] }))
  })

  it.each([[{ oddsRatio: 1, limit: 3 }], [{ oddsRatio: 0, limit: 3 }], [{ oddsRatio: 2, limit: 0 }], [{ oddsRatio: 2, limit: Number.NaN }]])('refuse settings %o', (settings) => {
    expect(() => riskAdjustedCusum([], settings)).toThrow(expect.objectContaining({ code: 'outcome.setting-invalid' }))
  })

  it('of a shift are the same to both sides', () => {
    fc.assert(fc.property(errors, (values) => {
      const settings = { target: 0, allowance: 0.1, limit: 2 }
      const forwards = shiftCusum(values, settings)
      const turned = shiftCusum(values.map(value => -value), settings)
      forwards.forEach(({ high, low }, index) => {
        expect(turned[index]!.low).toBeCloseTo(high, 10)
        expect(turned[index]!.high).toBeCloseTo(low, 10)
      })
    }))
  })

  it('of a shift refuse a gap in the series, and an allowance below 0', () => {
    expect(() => shiftCusum([0, Number.NaN], { target: 0, allowance: 0.1, limit: 2 })).toThrow(expect.objectContaining({ code: 'outcome.value-missing' }))
    expect(() => shiftCusum([0], { target: 0, allowance: -1, limit: 2 })).toThrow(expect.objectContaining({ code: 'outcome.setting-invalid' }))
  })
})

describe('assessCluster', () => {
  it.each([
    [0, 5000, false, 'none'], [1, 50, true, 'look-back'], [2, 50, false, 'look-back'], [2, 12, true, 'alert'], [2, 5000, false, 'look-back'],
    [2, 1000, false, 'investigate'], [3, 1000, false, 'alert'], [4, 5000, false, 'investigate'], [5, 5000, false, 'alert'],
  ])('%i cases in %i operations, together %s, ask for %s', (cases, operations, together, action) => {
    expect(assessCluster({ cases, operations, together }).action).toBe(action)
  })

  it('gives no chance from too few operations, and 1 for no case', () => {
    expect(assessCluster({ cases: 2, operations: 99, together: false }).chance).toEqual({ kind: 'too-few', eyes: 99, needed: 100 })
    expect(assessCluster({ cases: 0, operations: 100, together: false }).chance).toMatchObject({ kind: 'answer', atLeastSoMany: 1 })
  })

  it('never becomes calmer with one more case', () => {
    const order = ['none', 'look-back', 'investigate', 'alert']
    fc.assert(fc.property(fc.integer({ min: 0, max: 15 }), fc.integer({ min: 20, max: 20000 }), fc.boolean(), (cases, operations, together) => {
      const before = order.indexOf(assessCluster({ cases, operations, together }).action)
      expect(order.indexOf(assessCluster({ cases: cases + 1, operations, together }).action)).toBeGreaterThanOrEqual(before)
    }))
  })

  it('refuses more cases than operations, and a rate of 0', () => {
    expect(() => assessCluster({ cases: 3, operations: 2, together: false })).toThrow(expect.objectContaining({ code: 'outcome.count-invalid' }))
    expect(() => assessCluster({ cases: 1, operations: 200, together: false, rate: 0 })).toThrow(expect.objectContaining({ code: 'outcome.probability-invalid' }))
  })
})
