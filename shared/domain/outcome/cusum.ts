import { DomainError } from '#shared/domain/errors'
import { eyesForComparison } from '#shared/domain/outcome/statistics-answer'
import { checkPositive, checkProbability, checkSeries } from '#shared/domain/outcome/statistics-check'

/** One operation, in the order of operating. `probability` is its chance before surgery; absent stops the chart. */
export interface ChartedCase { event: boolean, probability?: number }

export interface CusumSettings {
  /** The change of odds to be found: 2 for doubled, 0.5 for halved. Not 1. */
  oddsRatio: number
  /** The chart signals from here on. 3 finds doubled odds at 1 % after about 600 operations, and cries wolf every 6900. */
  limit: number
}

export interface CusumPoint { weight: number, sum: number, excess: number, signal: boolean }

/** `in-control` is said only from 50 cases on: before that silence of the chart means nothing. A signal counts from the first case. */
export type CusumConclusion = 'too-few' | 'in-control' | 'signal'

export interface CusumChart { points: CusumPoint[], signalAt: number | null, conclusion: CusumConclusion, needed: number }

/**
 * What one operation adds: the log likelihood ratio of the changed odds against the expected ones. Steiner, Cook,
 * Farewell, Treasure, Biostatistics 2000;1:441-452 (formula from memory, checked against a published value).
 */
export function cusumWeight(event: boolean, probability: number, oddsRatio: number): number {
  const scale = 1 - probability + oddsRatio * probability
  return event ? Math.log(oddsRatio / scale) : -Math.log(scale)
}

/**
 * The risk-adjusted cumulative chart: S = max(0, S + weight), a signal while S is at or above the limit. `excess` runs
 * beside it: events so far less events expected. An event in a hard eye adds less than one in an easy eye.
 *
 * @throws DomainError `outcome.risk-missing` at the first case without a chance (it must not count as 0),
 * `outcome.probability-invalid`, `outcome.setting-invalid`
 */
export function riskAdjustedCusum(cases: readonly ChartedCase[], settings: CusumSettings): CusumChart {
  checkSettings(settings)
  let sum = 0
  let excess = 0
  const points = cases.map((one, index): CusumPoint => {
    const probability = requireProbability(one, index)
    const weight = cusumWeight(one.event, probability, settings.oddsRatio)
    sum = Math.max(0, sum + weight)
    excess += (one.event ? 1 : 0) - probability
    return { weight, sum, excess, signal: sum >= settings.limit }
  })
  return conclude(points)
}

/** The plain chart: every operation has the same acceptable chance. @throws DomainError as `riskAdjustedCusum` */
export function plainCusum(events: readonly boolean[], acceptableProbability: number, settings: CusumSettings): CusumChart {
  checkProbability('acceptableProbability', acceptableProbability)
  return riskAdjustedCusum(events.map(event => ({ event, probability: acceptableProbability })), settings)
}

export interface ShiftSettings {
  /** Where the mean should be. */
  target: number
  /** Half of the shift that matters, in the units of the values. 0 or more. */
  allowance: number
  limit: number
}

export interface ShiftPoint { high: number, low: number, signal: 'high' | 'low' | null }

/**
 * The cumulative chart of a measured value (prediction error, minutes), for a lasting shift to either side: Page,
 * Biometrika 1954;41:100-115, in its two-sided tabular form. A signal is a sum beyond the limit.
 *
 * @throws DomainError `outcome.value-missing`, `outcome.setting-invalid`
 */
export function shiftCusum(values: readonly number[], { target, allowance, limit }: ShiftSettings): ShiftPoint[] {
  checkSeries(values)
  checkSeries([target, allowance])
  checkPositive('limit', limit)
  if (allowance < 0) checkPositive('allowance', allowance)
  let high = 0
  let low = 0
  return values.map((value) => {
    high = Math.max(0, high + value - target - allowance)
    low = Math.max(0, low + target - value - allowance)
    return { high, low, signal: high > limit ? 'high' : low > limit ? 'low' : null }
  })
}

function conclude(points: CusumPoint[]): CusumChart {
  const found = points.findIndex(({ signal }) => signal)
  const silent = points.length < eyesForComparison ? 'too-few' : 'in-control'
  return { points, signalAt: found < 0 ? null : found, conclusion: found < 0 ? silent : 'signal', needed: eyesForComparison }
}

function checkSettings({ oddsRatio, limit }: CusumSettings): void {
  checkPositive('oddsRatio', oddsRatio)
  checkPositive('limit', limit)
  if (oddsRatio === 1) {
    throw new DomainError('outcome.setting-invalid', 'An odds ratio of 1 is no change, and nothing can be found.', {
      fields: [{ field: 'oddsRatio', code: 'no-change', message: 'Enter 2 for doubled odds, 0.5 for halved.' }],
    })
  }
}

function requireProbability({ probability }: ChartedCase, index: number): number {
  if (probability === undefined) {
    throw new DomainError('outcome.risk-missing', 'A case has no chance before surgery; the chart stops here.', {
      fields: [{ field: `cases.${index}.probability`, code: 'required', message: 'Assess the risk of this eye, or leave it out and count it as missing.' }],
    })
  }
  checkProbability(`cases.${index}.probability`, probability)
  return probability
}
