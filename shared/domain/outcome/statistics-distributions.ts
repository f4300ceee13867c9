import jStat from 'jstat'
import { gammaln } from 'simple-statistics'

/** Chance that a standard normal value is at most `z`. */
export function normalBelow(z: number): number {
  if (z === Number.POSITIVE_INFINITY) return 1
  if (z === Number.NEGATIVE_INFINITY) return 0
  return jStat.normal.cdf(z, 0, 1)
}

/** The standard normal value that is not passed with this probability, which lies strictly between 0 and 1. */
export function normalQuantile(probability: number): number {
  return jStat.normal.inv(probability, 0, 1)
}

/** The beta quantile, for exact limits of a proportion. Parameters above 0. */
export function betaQuantile(probability: number, first: number, second: number): number {
  return jStat.beta.inv(probability, first, second)
}

/** Chance of at most `count` events in `trials`, each with `probability`. Below 0 events is impossible, at or above `trials` certain. */
export function binomialAtMost(count: number, trials: number, probability: number): number {
  if (count < 0) return 0
  if (count >= trials) return 1
  return jStat.binomial.cdf(count, trials, probability)
}

/** Chance of at least `count` events where `mean` are expected: P(X >= count), which is 1 for a count of 0. */
export function poissonAtLeast(count: number, mean: number): number {
  if (count <= 0) return 1
  if (mean === 0) return 0
  // From the upper tail itself: 1 - P(X < count) loses every digit of a chance of one in a million.
  // Through logarithms: a factorial overflows at 171 events.
  let term = Math.exp(count * Math.log(mean) - mean - gammaln(count + 1))
  let sum = 0
  for (let k = count; term > sum * 1e-17 || k <= mean; k += 1) {
    sum += term
    term *= mean / (k + 1)
  }
  return Math.min(1, sum)
}
