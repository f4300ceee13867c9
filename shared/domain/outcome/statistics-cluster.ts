import type { Answer } from '#shared/domain/outcome/statistics-answer'
import { answerFrom } from '#shared/domain/outcome/statistics-answer'
import { checkCounts, checkPositive, checkProbability } from '#shared/domain/outcome/statistics-check'
import { poissonAtLeast } from '#shared/domain/outcome/statistics-distributions'

/** Endophthalmitis after cataract surgery per operation: national estimate of 0.02 %, RCOphth database report 13, Eye 2024;38:1386-1389. */
export const endophthalmitisRate = 0.0002

/** Below this many operations the expected number is so small that a chance says more about the number than about the care. Proposed. */
export const operationsForChance = 100

/** `look-back`: read the case again. `investigate`: more than chance explains easily. `alert`: infection control at once. Proposed. */
export type ClusterAction = 'none' | 'look-back' | 'investigate' | 'alert'

export interface ClusterQuestion {
  /** Cases in the window. */
  cases: number
  operations: number
  /** Two or more of the cases on one list, in one week at one site, or with one organism. */
  together: boolean
  /** Expected rate per operation, above 0 and below 1. */
  rate?: number
}

export interface ClusterAnswer {
  action: ClusterAction
  /** Chance of at least so many cases where all is as expected. A window chosen after the fact makes it look smaller than it is. */
  chance: Answer<{ atLeastSoMany: number, expected: number }>
}

/** Chances at which cases that did not come together are acted on. Proposed. */
export const clusterSteps = { investigate: 0.05, alert: 0.01 } as const

/**
 * Whether rare events are a cluster. Two on one list of twelve happen by chance about once in 380,000 lists at 0.02 %, so
 * cases that came together are acted on whatever the count; the others go by the Poisson tail P(X >= cases), as in
 * Allardice et al., J Hosp Infect 2001;49:23-29. One case alone is looked back on and is never called a cluster.
 *
 * @throws DomainError `outcome.count-invalid`, `outcome.probability-invalid`
 */
export function assessCluster({ cases, operations, together, rate = endophthalmitisRate }: ClusterQuestion): ClusterAnswer {
  checkCounts(cases, operations)
  checkProbability('rate', rate)
  const chance = answerFrom(operations, operationsForChance, () => ({ atLeastSoMany: poissonAtLeast(cases, operations * rate), expected: operations * rate }))
  if (cases === 0) return { action: 'none', chance }
  if (cases === 1) return { action: 'look-back', chance }
  if (together) return { action: 'alert', chance }
  if (chance.kind === 'too-few') return { action: 'look-back', chance }
  return { action: actionBy(chance.atLeastSoMany), chance }
}

function actionBy(chance: number): ClusterAction {
  if (chance <= clusterSteps.alert) return 'alert'
  return chance <= clusterSteps.investigate ? 'investigate' : 'look-back'
}

/** The least number of cases with P(X >= k) at or below `chance`. @throws DomainError `outcome.probability-invalid`, `outcome.setting-invalid` */
export function clusterCount(operations: number, rate: number, chance: number): number {
  checkPositive('operations', operations)
  checkProbability('rate', rate)
  checkProbability('chance', chance)
  let cases = 1
  while (poissonAtLeast(cases, operations * rate) > chance) cases += 1
  return cases
}
