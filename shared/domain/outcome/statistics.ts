import type { Answer } from '#shared/domain/outcome/statistics-answer'
import type { Interval } from '#shared/domain/outcome/statistics-intervals'
import { mean, median, sampleStandardDeviation } from 'simple-statistics'
import { answerFrom, eyesForSummary } from '#shared/domain/outcome/statistics-answer'
import { checkPositive, checkSeries } from '#shared/domain/outcome/statistics-check'
import { wilsonInterval } from '#shared/domain/outcome/statistics-intervals'

/** Limits of prediction error that services compare themselves by, in dioptres. */
export const usualLimitsD = [0.25, 0.5, 0.75, 1] as const

export interface WithinLimit { limitD: number, eyes: number, percent: number, interval: Interval }

export interface ErrorSummary {
  /** Mean with its sign: below 0 leans short-sighted. */
  meanD: number
  meanAbsoluteD: number
  medianAbsoluteD: number
  /** Sample standard deviation (n - 1). */
  spreadD: number
  within: WithinLimit[]
}

/**
 * Prediction errors (achieved less predicted, in dioptres): mean, mean and median absolute error, spread, and the share
 * within each limit, an error of exactly the limit being within. Median absolute error is asked for because absolute
 * errors are skewed (Hoffer et al. 2015, Am J Ophthalmol 160:403-405; from memory).
 *
 * @throws DomainError `outcome.value-missing`, `outcome.setting-invalid`
 */
export function summariseErrors(errorsD: readonly number[], limitsD: readonly number[] = usualLimitsD, needed = eyesForSummary): Answer<ErrorSummary> {
  checkSeries(errorsD)
  limitsD.forEach(limit => checkPositive('limitsD', limit))
  // The spread needs two eyes whatever was asked for.
  return answerFrom(errorsD.length, Math.max(2, needed), () => {
    const values = [...errorsD]
    const absolute = values.map(Math.abs)
    return {
      meanD: mean(values),
      meanAbsoluteD: mean(absolute),
      medianAbsoluteD: median(absolute),
      spreadD: sampleStandardDeviation(values),
      within: limitsD.map(limitD => withinLimit(absolute, limitD)),
    }
  })
}

function withinLimit(absolute: number[], limitD: number): WithinLimit {
  // 0.1 + 0.4 is a hair over a half in binary, and is half a dioptre to everybody else.
  const eyes = absolute.filter(value => value <= limitD + 1e-9).length
  return { limitD, eyes, percent: 100 * eyes / absolute.length, interval: wilsonInterval(eyes, absolute.length) }
}
