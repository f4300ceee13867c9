import { Temporal } from 'temporal-polyfill'
import type { Eye } from '#shared/domain/pathway/vocabulary'
import { isOver, plannedSpans } from '#shared/domain/theatre/day-plan'
import type { CaseState } from '#shared/domain/theatre/day-plan'
import { findBreaches, minuteOf } from '#shared/domain/theatre/list-constraints'
import type { CaseConstraints, ConstraintBreach } from '#shared/domain/theatre/list-constraints'

export interface BreachCase { id: string, patientName: string, eye: Eye, constraints: CaseConstraints, plannedMinutes: number, state: CaseState, endedAt: string | null }
export interface BreachList { startsAt: string, zone: string, anaesthetistFrom: string | null, anaesthetistTo: string | null, cases: readonly BreachCase[] }

/** The constraints that a list in this order does not keep, by its planned times on the site's clock. What is over is past mending and left out. */
export function breachesOf(list: BreachList): ConstraintBreach[] {
  const offset = minuteOfDay(list.startsAt, list.zone)
  const spans = plannedSpans(list.cases)
  const hours = list.anaesthetistFrom && list.anaesthetistTo
    ? { fromMinuteOfDay: minuteOfDay(list.anaesthetistFrom, list.zone), toMinuteOfDay: minuteOfDay(list.anaesthetistTo, list.zone) }
    : null
  const over = new Set(list.cases.filter(isOver).map(one => one.id))
  return findBreaches(list.cases.map((one, index) => ({ ...one, startMinuteOfDay: offset + spans[index]!.startMinute, endMinuteOfDay: offset + spans[index]!.endMinute })), hours)
    .filter(breach => !over.has(breach.caseId))
}

/** The first minute of the list at which this case can begin, because its interpreter or the anaesthetist is there; `null` when nobody is waited for. */
export function notBeforeMinute(list: Pick<BreachList, 'startsAt' | 'zone' | 'anaesthetistFrom'>, constraints: CaseConstraints): number | null {
  const offset = minuteOfDay(list.startsAt, list.zone)
  const waits = [
    minuteOf(constraints.interpreterFrom),
    constraints.needsAnaesthetist && list.anaesthetistFrom ? minuteOfDay(list.anaesthetistFrom, list.zone) : undefined,
  ].flatMap(minute => minute === undefined || minute <= offset ? [] : [minute - offset])
  return waits.length ? Math.max(...waits) : null
}

function minuteOfDay(instant: string, zone: string): number {
  const { hour, minute } = Temporal.Instant.from(instant).toZonedDateTimeISO(zone)
  return hour * 60 + minute
}

/**
 * The waiting cases in an order that breaks less: latex allergy, then diabetes, then the others as they stand, and who has to be waited
 * for moved back to the first place at which nobody waits. `null` when no such order is better. A proposal, never done by itself.
 */
export function proposeOrder(list: Omit<BreachList, 'cases'> & { cases: readonly (BreachCase & { notBeforeMinute: number | null })[] }): string[] | null {
  const fixed = list.cases.filter(one => one.state !== 'planned')
  const rank = ({ constraints }: BreachCase) => constraints.latexAllergy ? 0 : constraints.diabetic ? 1 : 2
  const sorted = list.cases.filter(one => one.state === 'planned').map((one, index) => ({ one, index })).sort((left, right) => rank(left.one) - rank(right.one) || left.index - right.index).map(({ one }) => one)
  const free = sorted.filter(one => one.notBeforeMinute === null)
  const ordered = [...free]
  for (const one of sorted.filter(each => each.notBeforeMinute !== null).sort((left, right) => left.notBeforeMinute! - right.notBeforeMinute!)) {
    const place = Array.from({ length: ordered.length + 1 }, (_, index) => index).find((index) => {
      const start = plannedSpans([...fixed, ...ordered.slice(0, index), one]).at(-1)!.startMinute
      return start >= one.notBeforeMinute!
    })
    ordered.splice(place ?? ordered.length, 0, one)
  }
  const proposed = breachesOf({ ...list, cases: [...fixed, ...ordered] }).length
  return proposed < breachesOf(list).length ? ordered.map(one => one.id) : null
}
