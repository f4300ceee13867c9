import type { LogNormalMinutes } from '#shared/domain/theatre/duration'
import type { ListPlan } from '#shared/domain/theatre/list-plan'
import { normalBelow } from '#shared/domain/outcome/statistics-distributions'
import { checkPlan, lastMinute } from '#shared/domain/theatre/list-plan'

/** Half a minute: far finer than a theatre clock, coarse enough to be instant. */
const stepMinutes = 0.5
const lastStep = lastMinute / stepMinutes
/** Thinner tails than this change no figure that is shown. */
const negligible = 1e-12

export interface CaseForecast {
  id: string
  expectedStartMinute: number
  expectedFinishMinute: number
  /** Passed one day in ten. */
  slowFinishMinute: number
}

export interface ListForecast {
  cases: CaseForecast[]
  expectedFinishMinute: number
  medianFinishMinute: number
  slowFinishMinute: number
  /** Chance that the last case ends after `endMinute`, 0 to 1. */
  overrunProbability: number
}

/** A distribution of a moment: chances of `from`, `from + 1`, ... steps of half a minute. */
interface Moment { from: number, chances: Float64Array }

/**
 * When a list ends, worked out on a grid of half minutes: each case's duration is added to the moment it starts by
 * convolution, and a case that may not start early gathers what would be too early at its own minute. No chance
 * enters, so the same list always gives the same answer, and dragging a case gives it at once.
 *
 * Cases are taken to be independent. On a day when everything is slow they are not, and the tail is longer than shown.
 *
 * @throws DomainError `theatre.list-invalid`
 */
export function forecastList(plan: ListPlan): ListForecast {
  checkPlan(plan)
  const cases: CaseForecast[] = []
  let free: Moment = certain(plan.startMinute ?? 0)
  plan.cases.forEach(({ id, duration, notBeforeMinute }, index) => {
    const start = notBefore(index === 0 ? free : later(free, plan.turnoverMinutes), index === 0 && plan.elapsedMinutes !== undefined ? 0 : notBeforeMinute ?? 0)
    const finish = add(start, durationOf(duration, index === 0 ? plan.elapsedMinutes ?? 0 : 0))
    cases.push({ id, expectedStartMinute: meanOf(start), expectedFinishMinute: meanOf(finish), slowFinishMinute: quantileOf(finish, 0.9) })
    free = finish
  })
  return {
    cases,
    expectedFinishMinute: meanOf(free),
    medianFinishMinute: quantileOf(free, 0.5),
    slowFinishMinute: quantileOf(free, 0.9),
    overrunProbability: chanceAfter(free, plan.endMinute),
  }
}

function certain(minute: number): Moment {
  return { from: Math.round(minute / stepMinutes), chances: Float64Array.of(1) }
}

function later(moment: Moment, minutes: number): Moment {
  return { ...moment, from: moment.from + Math.round(minutes / stepMinutes) }
}

function notBefore(moment: Moment, minute: number): Moment {
  const earliest = Math.round(minute / stepMinutes)
  if (moment.from >= earliest) return moment
  const tooEarly = earliest - moment.from
  const chances = new Float64Array(Math.max(1, moment.chances.length - tooEarly))
  moment.chances.forEach((chance, index) => {
    chances[Math.max(0, index - tooEarly)]! += chance
  })
  return { from: earliest, chances }
}

/** The duration of one case; one that is under way for `elapsed` minutes is known to take longer. */
function durationOf({ logMedian, logSpread }: LogNormalMinutes, elapsed: number): Moment {
  const below = (minutes: number) => minutes <= 0 ? 0 : normalBelow((Math.log(minutes) - logMedian) / logSpread)
  const gone = below(elapsed)
  // Far beyond its own tail nothing is left to divide by: such a case is taken to end now.
  if (1 - gone < negligible) return certain(elapsed)
  const from = Math.floor(elapsed / stepMinutes)
  const to = Math.min(lastStep, Math.max(from + 1, Math.ceil(Math.exp(logMedian + 6.5 * logSpread) / stepMinutes)))
  const chances = new Float64Array(to - from + 1)
  let before = gone
  for (let step = from; step <= to; step += 1) {
    const upTo = step === to ? 1 : Math.max(gone, below((step + 0.5) * stepMinutes))
    chances[step - from] = Math.max(0, upTo - before) / (1 - gone)
    before = upTo
  }
  return { from, chances }
}

function add(start: Moment, duration: Moment): Moment {
  const chances = new Float64Array(start.chances.length + duration.chances.length - 1)
  start.chances.forEach((chance, index) => {
    if (chance < negligible) return
    for (let step = 0; step < duration.chances.length; step += 1) chances[index + step]! += chance * duration.chances[step]!
  })
  return trim({ from: start.from + duration.from, chances })
}

/** Drops thin ends, and keeps the rest a distribution: what is dropped is given to the end that is kept. */
function trim({ from, chances }: Moment): Moment {
  let first = 0
  let last = chances.length - 1
  let low = 0
  let high = 0
  while (first < last && low + chances[first]! < negligible) low += chances[first++]!
  while (last > first && high + chances[last]! < negligible) high += chances[last--]!
  const kept = chances.slice(first, last + 1)
  kept[0]! += low
  kept[kept.length - 1]! += high
  return { from: from + first, chances: kept }
}

function meanOf({ from, chances }: Moment): number {
  return chances.reduce((sum, chance, index) => sum + chance * (from + index), 0) * stepMinutes
}

function quantileOf({ from, chances }: Moment, probability: number): number {
  let sofar = 0
  for (let index = 0; index < chances.length; index += 1) {
    sofar += chances[index]!
    if (sofar >= probability) return (from + index) * stepMinutes
  }
  return (from + chances.length - 1) * stepMinutes
}

/** A step stands for the quarter minutes around it: of the one that holds the minute itself, half is after. */
function chanceAfter({ from, chances }: Moment, minute: number): number {
  const at = minute / stepMinutes - from
  const after = chances.reduce((sum, chance, index) => sum + chance * Math.min(1, Math.max(0, index + 0.5 - at)), 0)
  return Math.min(1, Math.max(0, after))
}
