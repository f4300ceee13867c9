import type { ListPlan } from '#shared/domain/theatre/list-plan'
import { normalBelow, normalQuantile } from '#shared/domain/outcome/statistics-distributions'
import { checkPlan } from '#shared/domain/theatre/list-plan'
import { seededRandom } from '#shared/domain/theatre/seeded-random'

export interface ListSimulation { runs: number, expectedFinishMinute: number, overrunProbability: number }

/**
 * The same question as `forecastList`, answered by playing the list many times. Slower, but it knows nothing of grids
 * and convolutions, so it can say when those are wrong. The same seed gives the same answer.
 *
 * @param seed any whole number
 * @throws DomainError `theatre.list-invalid`
 */
export function simulateList(plan: ListPlan, runs: number, seed: number): ListSimulation {
  checkPlan(plan)
  const random = seededRandom(seed)
  const normal = normalPairs(random)
  const conditional = underWay(plan, random)
  let finishes = 0
  let overruns = 0
  for (let run = 0; run < runs; run += 1) {
    let free = plan.startMinute ?? 0
    plan.cases.forEach(({ duration, notBeforeMinute }, index) => {
      const underWayNow = index === 0 && plan.elapsedMinutes !== undefined
      const start = index === 0 ? free : free + plan.turnoverMinutes
      const begun = underWayNow ? start : Math.max(start, notBeforeMinute ?? 0)
      free = begun + (underWayNow ? conditional() : Math.exp(duration.logMedian + duration.logSpread * normal()))
    })
    finishes += free
    if (free > plan.endMinute) overruns += 1
  }
  return { runs, expectedFinishMinute: finishes / runs, overrunProbability: overruns / runs }
}

/** Standard normal values by the method of Box and Muller (1958). */
function normalPairs(random: () => number): () => number {
  let spare: number | undefined
  return () => {
    if (spare !== undefined) {
      const kept = spare
      spare = undefined
      return kept
    }
    // 1 - random() is never 0, so its logarithm is a number.
    const radius = Math.sqrt(-2 * Math.log(1 - random()))
    const angle = 2 * Math.PI * random()
    spare = radius * Math.sin(angle)
    return radius * Math.cos(angle)
  }
}

/** Durations of a case that has been under way for a while: drawn only from what lies beyond. */
function underWay({ cases, elapsedMinutes }: ListPlan, random: () => number): () => number {
  const { logMedian, logSpread } = cases[0]!.duration
  const elapsed = elapsedMinutes ?? 0
  const gone = elapsed <= 0 ? 0 : normalBelow((Math.log(elapsed) - logMedian) / logSpread)
  if (1 - gone < 1e-12) return () => elapsed
  return () => {
    const probability = gone + (1 - gone) * random()
    return probability <= 0 || probability >= 1 ? elapsed : Math.max(elapsed, Math.exp(logMedian + logSpread * normalQuantile(probability)))
  }
}
