import { describe, expect, it } from 'vitest'
import { cusumWeight, riskAdjustedCusum, shiftCusum } from '#shared/domain/outcome/cusum'
import { alarmingCount, funnelLimits } from '#shared/domain/outcome/funnel'
import { assessCluster, clusterCount } from '#shared/domain/outcome/statistics-cluster'
import { binomialAtMost, normalQuantile, poissonAtLeast } from '#shared/domain/outcome/statistics-distributions'
import { exactInterval, wilsonInterval } from '#shared/domain/outcome/statistics-intervals'
import { seededRandom } from '#shared/domain/theatre/seeded-random'

// Percentages worked out separately from the textbook formulas; 13/227 reproduces the published exact 3.1 to 9.6 (Tan et al., Eye 2000;14:53-55).
const intervals: [number, number, number, number, number, number][] = [
  [0, 100, 0, 3.6993, 0, 3.6217], [0, 500, 0, 0.7624, 0, 0.7351], [1, 100, 0.1767, 5.4486, 0.0253, 5.4459],
  [3, 250, 0.4089, 3.4681, 0.2482, 3.4667], [5, 500, 0.4279, 2.3193, 0.3255, 2.3181], [8, 400, 1.0168, 3.8963, 0.8673, 3.9026],
  [20, 1000, 1.2984, 3.0690, 1.2258, 3.0720], [1, 2000, 0.0088, 0.2827, 0.0013, 0.2783], [14, 75827, 0.0110, 0.0310, 0.0101, 0.0310],
  [470, 500, 91.5639, 95.7652, 91.5451, 95.9156], [13, 227, 3.3770, 9.5502, 3.0842, 9.5940],
]

describe('intervals of a share', () => {
  it.each(intervals)('of %i in %i are Wilson %f to %f and exact %f to %f percent', (events, eyes, wilsonLow, wilsonHigh, exactLow, exactHigh) => {
    const wilson = wilsonInterval(events, eyes)
    const exact = exactInterval(events, eyes)
    expect([wilson.low, wilson.high, exact.low, exact.high].map(share => Number((share * 100).toFixed(4)))).toEqual([wilsonLow, wilsonHigh, exactLow, exactHigh])
  })

  // The definition itself, by plain sums over exact counts: each end leaves 2.5 % beyond. No library is asked.
  it.each(intervals.filter(([, eyes]) => eyes <= 2000))('of %i in %i leave two and a half percent beyond each exact end', (events, eyes) => {
    const { low, high } = exactInterval(events, eyes)
    if (events > 0) expect(1 - plainBinomialAtMost(events - 1, eyes, low)).toBeCloseTo(0.025, 5)
    if (events < eyes) expect(plainBinomialAtMost(events, eyes, high)).toBeCloseTo(0.025, 5)
  })

  // 1067 of 55,567 (Narendran et al. 2009) is given as 1.81 to 2.04 %; 9730 of 961,208 (Sim et al. 2024) comes to 0.9925 to 1.0325 %.
  it.each([[1067, 55567, 1.81, 2.04, 2], [9730, 961208, 0.9925, 1.0325, 4]])('of %i in %i agree with the printed ones', (events, eyes, low, high, digits) => {
    const wilson = wilsonInterval(events, eyes)
    expect(wilson.low * 100).toBeCloseTo(low, digits)
    expect(wilson.high * 100).toBeCloseTo(high, digits)
  })

  // Rule of three: 0 of n has a one-sided upper 95 % limit of about 3/n, exactly 1 - 0.05^(1/n).
  it.each([100, 500])('of 0 in %i end one-sidedly where 0.05 is left', (eyes) => {
    expect(exactInterval(0, eyes, 0.9).high).toBeCloseTo(1 - 0.05 ** (1 / eyes), 8)
  })
})

// Worked out separately from Spiegelhalter, Stat Med 2005;24:1185-1202: 95 % low, high, 99.8 % low, high, then the alarming counts.
const funnelRows: [number, number, number, number, number, number, number, number][] = [
  [0.0101, 50, 0, 3.718, 0, 6.872, 3, 5], [0.0101, 100, 0, 2.903, 0, 4.855, 4, 6], [0.0101, 200, 0, 2.388, 0, 3.546, 6, 9],
  [0.0101, 300, 0, 2.139, 0, 3.041, 8, 11], [0.0101, 500, 0.118, 1.884, 0, 2.557, 11, 14], [0.0101, 1000, 0.389, 1.627, 0.128, 2.072, 18, 22],
  [0.0101, 2000, 0.569, 1.446, 0.366, 1.743, 30, 36], [0.0101, 5000, 0.732, 1.287, 0.591, 1.464, 66, 75],
  [0.0195, 500, 0.724, 3.155, 0.232, 4.012, 17, 22], [0.0195, 1000, 1.090, 2.799, 0.700, 3.383, 29, 35],
]

describe('the funnel', () => {
  it.each(funnelRows)('around %f at %i eyes has the worked-out lines and counts', (target, eyes, low, high, outerLow, outerHigh, inner, outer) => {
    const ninetyFive = funnelLimits(target, eyes, 0.025)
    const outerLines = funnelLimits(target, eyes, 0.001)
    expect(ninetyFive.low * 100).toBeCloseTo(low, 2)
    expect(ninetyFive.high * 100).toBeCloseTo(high, 2)
    expect(outerLines.low * 100).toBeCloseTo(outerLow, 2)
    expect(outerLines.high * 100).toBeCloseTo(outerHigh, 2)
    expect([alarmingCount(target, eyes, 0.025), alarmingCount(target, eyes, 0.001)]).toEqual([inner, outer])
  })
})

/** Worked out separately: chance, event, weight for odds doubled, its sum, weight for odds halved, its sum, events less expected. */
const chartRows: [number, 0 | 1, number, number, number, number, number][] = [
  [0.0074, 0, -0.00737, 0, 0.00371, 0.00371, -0.0074], [0.0105, 0, -0.01045, 0, 0.00526, 0.00897, -0.0179],
  [0.0213, 0, -0.02108, 0, 0.01071, 0.01968, -0.0392], [0.0074, 1, 0.68577, 0.68577, -0.68944, 0, 0.9534],
  [0.0410, 0, -0.04018, 0.64559, 0.02071, 0.02071, 0.9124], [0.0136, 0, -0.01351, 0.63208, 0.00682, 0.02754, 0.8988],
  [0.0883, 1, 0.60853, 1.24061, -0.64799, 0, 1.8105], [0.0117, 0, -0.01163, 1.22898, 0.00587, 0.00587, 1.7988],
  [0.0074, 0, -0.00737, 1.22161, 0.00371, 0.00957, 1.7914], [0.0319, 1, 0.66175, 1.88336, -0.67707, 0, 2.7595],
  [0.0105, 0, -0.01045, 1.87291, 0.00526, 0.00526, 2.7490], [0.0157, 0, -0.01558, 1.85733, 0.00788, 0.01314, 2.7333],
  [0.2500, 1, 0.47000, 2.32734, -0.55962, 0, 3.4833], [0.0117, 0, -0.01163, 2.31570, 0.00587, 0.00587, 3.4716],
  [0.0074, 1, 0.68577, 3.00148, -0.68944, 0, 4.4642], [0.0105, 0, -0.01045, 2.99103, 0.00526, 0.00526, 4.4537],
  [0.0136, 0, -0.01351, 2.97752, 0.00682, 0.01209, 4.4401], [0.0213, 1, 0.67207, 3.64960, -0.68244, 0, 5.4188],
  [0.0095, 0, -0.00946, 3.64014, 0.00476, 0.00476, 5.4093], [0.0074, 1, 0.68577, 4.32591, -0.68944, 0, 6.4019],
]
const charted = chartRows.map(([probability, event]) => ({ probability, event: event === 1 }))

describe('the risk-adjusted chart', () => {
  // Steiner et al. 2000. Published value: Parsonnet 19, logit -3.67 + 0.077 x 19, no event, odds ratio 0.5 gives 0.05083
  // (documentation of a statistics package quoting Rigdon and Fricker 2015).
  it('gives the published weight of a case of Parsonnet score 19', () => {
    const logit = -3.67 + 0.077 * 19
    const probability = 1 / (1 + Math.exp(-logit))
    expect(cusumWeight(false, probability, 0.5)).toBeCloseTo(0.05083, 5)
    expect(cusumWeight(false, probability, 2)).toBeCloseTo(-0.094513, 6)
  })

  it.each([[0.0101, 0.68310, -0.01005], [0.0195, 0.67383, -0.01931]])('weighs an event at %f with %f and none with %f', (probability, event, none) => {
    expect(cusumWeight(true, probability, 2)).toBeCloseTo(event, 5)
    expect(cusumWeight(false, probability, 2)).toBeCloseTo(none, 5)
  })

  it.each(chartRows.map((row, index) => [index + 1, ...row] as const))('stands at case %i where it was worked out', (number, _probability, _event, weight, sum, lowerWeight, lowerSum, excess) => {
    const worse = riskAdjustedCusum(charted, { oddsRatio: 2, limit: 3 }).points[number - 1]!
    const better = riskAdjustedCusum(charted, { oddsRatio: 0.5, limit: 3 }).points[number - 1]!
    expect(worse.weight).toBeCloseTo(weight, 4)
    expect(worse.sum).toBeCloseTo(sum, 4)
    expect(better.weight).toBeCloseTo(lowerWeight, 4)
    expect(better.sum).toBeCloseTo(lowerSum, 4)
    expect(worse.excess).toBeCloseTo(excess, 4)
  })

  it.each([[3, 14], [4, 19], [4.5, null]])('with the limit %f signals first at index %s', (limit, index) => {
    expect(riskAdjustedCusum(charted, { oddsRatio: 2, limit }).signalAt).toBe(index)
  })

  // Average run lengths by Markov chain, worked out separately; here by 2000 seeded runs, whose mean is good to about 7 % (three standard errors).
  it.each([[1, 6917], [2, 599], [3, 271]])('with true odds of %f at 1.01 %% runs about %i operations to a signal at 3', (trueOdds, operations) => {
    const random = seededRandom(42)
    const odds = 0.0101 / 0.9899 * trueOdds
    const truth = odds / (1 + odds)
    const weights = { event: cusumWeight(true, 0.0101, 2), none: cusumWeight(false, 0.0101, 2) }
    let total = 0
    for (let run = 0; run < 2000; run += 1) {
      for (let sum = 0; sum < 3; total += 1) sum = Math.max(0, sum + (random() < truth ? weights.event : weights.none))
    }
    expect(Math.abs(total / 2000 / operations - 1)).toBeLessThan(0.07)
  })
})

describe('the chart of a lasting shift', () => {
  // Montgomery and Runger, Applied Statistics and Probability for Engineers, example 16-6 and table 16-8: target 99, K = 1, H = 10.
  const concentrations = [102.0, 94.8, 98.3, 98.4, 102.0, 98.5, 99.0, 97.7, 100.0, 98.1, 101.3, 98.7, 101.1, 98.4, 97.0, 96.7, 100.3, 101.4, 97.2, 101.0]
  const upper = [2, 0, 0, 0, 2, 0.5, 0, 0, 0, 0, 1.3, 0, 1.1, 0, 0, 0, 0.3, 1.7, 0, 1]
  const lower = [0, 3.2, 2.9, 2.5, 0, 0, 0, 0.3, 0, 0, 0, 0, 0, 0, 1, 2.3, 0, 0, 0.8, 0]
  const points = shiftCusum(concentrations, { target: 99, allowance: 1, limit: 10 })

  it.each(concentrations.map((value, index) => [index + 1, value]))('follows the printed table at observation %i (%f)', (number) => {
    expect(points[number - 1]!.high).toBeCloseTo(upper[number - 1]!, 8)
    expect(points[number - 1]!.low).toBeCloseTo(lower[number - 1]!, 8)
  })

  it('is in control there, and signals high once the limit is passed', () => {
    expect(points.every(({ signal }) => signal === null)).toBe(true)
    expect(shiftCusum(concentrations, { target: 99, allowance: 1, limit: 1.9 }).map(({ signal }) => signal)).toContain('high')
  })
})

describe('clusters of rare events', () => {
  // Poisson P(X >= k) at 0.02 %, worked out separately.
  it.each([
    [100, 1, 0.0198], [250, 1, 0.0488], [500, 1, 0.0952], [1000, 2, 0.01752], [2000, 2, 0.06155], [5000, 1, 0.6321], [5000, 3, 0.08030], [10000, 2, 0.59399],
  ])('in %i operations at least %i cases come with chance %f', (operations, cases, chance) => {
    expect(poissonAtLeast(cases, operations * 0.0002)).toBeCloseTo(chance, 4)
  })

  // The least count with a chance of 5, 1 and 0.1 % or less, worked out separately.
  it.each([
    [100, 0.0002, 1, 2, 2], [250, 0.0002, 1, 2, 3], [500, 0.0002, 2, 2, 3], [1000, 0.0002, 2, 3, 4], [2000, 0.0002, 3, 3, 4], [5000, 0.0002, 4, 5, 6], [10000, 0.0002, 6, 7, 9],
    [1000, 0.0005, 3, 4, 5], [5000, 0.0005, 6, 8, 10], [1000, 0.0014, 5, 6, 7], [5000, 0.0014, 13, 15, 17], [10000, 0.0014, 21, 24, 28],
  ])('in %i operations at %f the counts that stand out are %i, %i and %i', (operations, rate, five, one, tenth) => {
    expect([0.05, 0.01, 0.001].map(chance => clusterCount(operations, rate, chance))).toEqual([five, one, tenth])
  })

  // Sparrow, ARVO 2006, studied these definitions at 1 in 700; the single-window chances were worked out separately.
  it.each([[2, 300, 0.069], [5, 2000, 0.161]])('%i in %i at one in 700 come with chance %f', (cases, operations, chance) => {
    expect(poissonAtLeast(cases, operations / 700)).toBeCloseTo(chance, 3)
  })

  // RCOphth guidance on outbreaks, 2022: cases that come together are acted on at once; the rule itself is proposed.
  it('raises the alarm for two cases on one list of twelve, though no chance is given from so few operations', () => {
    const { action, chance } = assessCluster({ cases: 2, operations: 12, together: true })
    expect(action).toBe('alert')
    expect(chance).toEqual({ kind: 'too-few', eyes: 12, needed: 100 })
  })
})

describe('distributions', () => {
  // Printed tables of the normal curve.
  it.each([[0.9, 1.281552], [0.975, 1.959964], [0.999, 3.090232]])('the normal value not passed with %f is %f', (probability, z) => {
    expect(normalQuantile(probability)).toBeCloseTo(z, 6)
  })

  it.each([[0, 10, 0.3], [3, 250, 0.0101], [50, 5000, 0.0101], [40, 2000, 0.0195], [99, 100, 0.99]])('at most %i of %i at %f agrees with a plain sum', (count, trials, probability) => {
    expect(binomialAtMost(count, trials, probability)).toBeCloseTo(plainBinomialAtMost(count, trials, probability), 8)
  })

  it.each([[0, 0.5], [1, 1], [2, 0.0024], [7, 3.2], [200, 150], [171, 172]])('at least %i where %f are expected agrees with a plain sum', (count, mean) => {
    let term = Math.exp(-mean)
    let below = 0
    for (let k = 0; k < count; k += 1) {
      below += term
      term *= mean / (k + 1)
    }
    expect(poissonAtLeast(count, mean)).toBeCloseTo(1 - below, 8)
  })
})

/** The sum of the terms, each from the one before, in logarithms; shares nothing with the library that the product asks. */
function plainBinomialAtMost(count: number, trials: number, probability: number): number {
  let logTerm = trials * Math.log1p(-probability)
  let sum = Math.exp(logTerm)
  for (let k = 1; k <= count; k += 1) {
    logTerm += Math.log((trials - k + 1) / k) + Math.log(probability / (1 - probability))
    sum += Math.exp(logTerm)
  }
  return sum
}
