import type { LogNormalMinutes } from '#shared/domain/theatre/duration'
import type { ListPlan } from '#shared/domain/theatre/list-plan'
import { describe, expect, it } from 'vitest'
import { learnDurations, predictDuration } from '#shared/domain/theatre/duration'
import { forecastList } from '#shared/domain/theatre/list-forecast'
import { simulateList } from '#shared/domain/theatre/list-simulation'
import { seededRandom } from '#shared/domain/theatre/seeded-random'

const minutes = (median: number, logSpread: number): LogNormalMinutes => ({ logMedian: Math.log(median), logSpread })
const routine = (count: number, median = 25, spread = 0.25) => Array.from({ length: count }, (_, index) => ({ id: `r${index}`, duration: minutes(median, spread) }))
const dense = { id: 'dense', duration: minutes(75, 0.35) }

/** Ten lists of different make; end times are chosen so that the chances run from small to great. */
const sampleLists: [string, ListPlan][] = [
  ['eight routine cases', { cases: routine(8), turnoverMinutes: 8, endMinute: 270 }],
  ['twelve routine cases', { cases: routine(12), turnoverMinutes: 8, endMinute: 400 }],
  ['one dense nucleus in the middle', { cases: [...routine(4), dense, ...routine(4)], turnoverMinutes: 8, endMinute: 350 }],
  ['a dense nucleus at the end', { cases: [...routine(6), dense], turnoverMinutes: 10, endMinute: 300 }],
  ['three dense nuclei', { cases: [dense, dense, dense], turnoverMinutes: 15, endMinute: 270 }],
  ['one single case', { cases: [dense], turnoverMinutes: 8, endMinute: 90 }],
  ['a break that most mornings reach in time', { cases: [...routine(5), ...routine(4).map((one, index) => index ? one : { ...one, notBeforeMinute: 200 })], turnoverMinutes: 7, endMinute: 340 }],
  ['a break that a dense nucleus runs into', { cases: [...routine(3), dense, { id: 'late', duration: minutes(25, 0.25), notBeforeMinute: 200 }, ...routine(2)], turnoverMinutes: 8, endMinute: 300 }],
  ['a first case under way for forty minutes', { cases: [dense, ...routine(5)], startMinute: 12, elapsedMinutes: 40, turnoverMinutes: 8, endMinute: 290 }],
  ['an uncertain surgeon without cases', { cases: [...routine(6, 32, 0.6)], turnoverMinutes: 12, endMinute: 300 }],
]

describe('the forecast of a list', () => {
  // Independent computation: the list played 100,000 times with a seeded generator.
  it.each(sampleLists)('of %s agrees with 100,000 simulated days within two percentage points', (_, plan) => {
    const forecast = forecastList(plan)
    const simulated = simulateList(plan, 100_000, 20261015)
    expect(simulated.overrunProbability).toBeGreaterThan(0.01)
    expect(simulated.overrunProbability).toBeLessThan(0.99)
    expect(Math.abs(forecast.overrunProbability - simulated.overrunProbability)).toBeLessThan(0.02)
    expect(Math.abs(forecast.expectedFinishMinute - simulated.expectedFinishMinute)).toBeLessThan(1)
  })

  // Mean of a lognormal: exp(m + s^2/2); means of independent cases add up, with the turnovers between them. Worked by hand.
  it.each([[4, 25, 0.25, 8, 127.17], [12, 25, 0.25, 8, 397.52], [3, 75, 0.35, 15, 269.21]])('of %i cases around %f min ends on average where the means add up to', (count, median, spread, turnoverMinutes, finish) => {
    const { expectedFinishMinute } = forecastList({ cases: routine(count, median, spread), turnoverMinutes, endMinute: 600 })
    expect(expectedFinishMinute).toBeCloseTo(finish, 1)
  })

  // One case: the chance is the lognormal tail itself. Tables of the normal curve: P(Z > 0) = 0.5, P(Z > 1) = 0.15866, P(Z > 1.644854) = 0.05.
  it.each([[0, 0.5], [1, 0.15866], [1.644854, 0.05]])('of one case is late with the normal tail beyond %f', (z, chance) => {
    const endMinute = 60 * Math.exp(z * 0.3)
    expect(forecastList({ cases: routine(1, 60, 0.3), turnoverMinutes: 0, endMinute }).overrunProbability).toBeCloseTo(chance, 3)
  })

  // Own goal for live reordering: under 100 ms on this machine's two shared cores; the first run warms up.
  it('of twelve cases with a break is ready in less than 100 ms', () => {
    const plan = sampleLists[6]![1]
    forecastList(plan)
    const times = Array.from({ length: 9 }, () => {
      const start = performance.now()
      forecastList({ ...plan, cases: [...plan.cases, ...routine(3)] })
      return performance.now() - start
    }).sort((one, other) => one - other)
    expect(times[4]).toBeLessThan(100)
  })
})

describe('the learnt duration', () => {
  // Common practice: a routine case is the unit, a rock-hard nucleus takes about three.
  it('of a surgeon without cases is 25 minutes, and three times that for a dense nucleus', () => {
    const model = learnDurations([])
    expect(predictDuration(model, { difficulty: 'routine' }).medianMinutes).toBeCloseTo(25, 10)
    expect(predictDuration(model, { difficulty: 'dense' }).medianMinutes).toBeCloseTo(75, 10)
  })

  // Worked by hand: (5 ln 25 + 5 ln 16) / 10 = ln 20, because five own cases weigh as much as the default.
  it('of five own cases of 16 minutes lies halfway, in ratio, to the default of 25', () => {
    const model = learnDurations(Array.from({ length: 5 }, () => ({ difficulty: 'routine' as const, minutes: 16 })))
    expect(predictDuration(model, { difficulty: 'routine' }).medianMinutes).toBeCloseTo(20, 10)
    expect(predictDuration(model, { difficulty: 'dense' }).medianMinutes).toBeCloseTo(60, 10)
  })

  // Worked by hand: variance = (5 x 0.25^2 + 2.5 x 0.2^2) / 10 x 1.1 for five cases all at exp(-0.2) of the default.
  it('spreads wider where five cases disagree with the default', () => {
    const away = learnDurations(Array.from({ length: 5 }, () => ({ difficulty: 'routine' as const, minutes: 25 * Math.exp(-0.2) })))
    expect(away.byDifficulty.routine.logSpread).toBeCloseTo(Math.sqrt((5 * 0.0625 + 2.5 * 0.04) / 10 * 1.1), 10)
  })

  // 90th percentile of a lognormal: median x exp(1.281552 x spread); normal quantile from tables. Default spread 0.25 widened by 1/5.
  it('is passed by one case in ten at its slow end', () => {
    const duration = predictDuration(learnDurations([]), { difficulty: 'routine' })
    expect(duration.slowMinutes).toBeCloseTo(25 * Math.exp(1.281552 * 0.25 * Math.sqrt(1.2)), 3)
  })
})

// First values for seed 1 as widely published with the generator; from memory, and worked out again in exact whole numbers here.
describe('the seeded generator', () => {
  it('follows its own definition in exact arithmetic', () => {
    const mask = 0xFFFFFFFFn
    let state = 1n
    const exact = () => {
      state = (state + 0x6D2B79F5n) & mask
      let mixed = ((state ^ (state >> 15n)) * (1n | state)) & mask
      mixed = ((mixed + (((mixed ^ (mixed >> 7n)) * (61n | mixed)) & mask)) & mask) ^ mixed
      return Number((mixed ^ (mixed >> 14n)) & mask) / 2 ** 32
    }
    const random = seededRandom(1)
    const ours = Array.from({ length: 1000 }, random)
    expect(ours).toEqual(Array.from({ length: 1000 }, exact))
    expect(ours[0]).toBeCloseTo(0.6270739405881613, 12)
  })
})
