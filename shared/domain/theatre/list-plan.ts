import type { FieldProblem } from '#shared/domain/errors'
import type { LogNormalMinutes } from '#shared/domain/theatre/duration'
import { DomainError } from '#shared/domain/errors'

/** One case on a list. Minutes are counted from the start of the list. */
export interface ListCase {
  id: string
  duration: LogNormalMinutes
  /** Not before this minute: after a break, or when the patient or the anaesthetist is there. */
  notBeforeMinute?: number
}

export interface ListPlan {
  /** In order. Finished cases are left out; the first one may be under way. */
  cases: readonly ListCase[]
  /** When the first case begins or began, in minutes from the start of the list. */
  startMinute?: number
  /** How long the first case has been under way: it is then known to take longer than this. */
  elapsedMinutes?: number
  /** Between the end of a case and the start of the next. */
  turnoverMinutes: number
  /** When the list has to be over. */
  endMinute: number
}

/** The last minute that a forecast looks at: a day. */
export const lastMinute = 1440

/** @throws DomainError `theatre.list-invalid` with every field that cannot be planned with */
export function checkPlan(plan: ListPlan): void {
  const fields: FieldProblem[] = [
    ...outside('turnoverMinutes', plan.turnoverMinutes, 0, 120),
    ...outside('endMinute', plan.endMinute, 0, lastMinute),
    ...outside('startMinute', plan.startMinute ?? 0, 0, lastMinute),
    ...outside('elapsedMinutes', plan.elapsedMinutes ?? 0, 0, 600),
    ...plan.cases.flatMap(({ duration, notBeforeMinute }, index) => [
      ...outside(`cases.${index}.notBeforeMinute`, notBeforeMinute ?? 0, 0, lastMinute),
      ...outside(`cases.${index}.duration.logMedian`, duration.logMedian, -2, Math.log(lastMinute)),
      ...outside(`cases.${index}.duration.logSpread`, duration.logSpread, 0.01, 2),
    ]),
  ]
  if (!plan.cases.length) fields.push({ field: 'cases', code: 'required', message: 'Put at least one case on the list.' })
  if (plan.cases.length > 60) fields.push({ field: 'cases', code: 'too-many', message: 'A list holds at most 60 cases.', limit: '60' })
  if (fields.length) throw new DomainError('theatre.list-invalid', 'This list cannot be forecast.', { fields })
}

function outside(field: string, value: number, min: number, max: number): FieldProblem[] {
  return value >= min && value <= max ? [] : [{ field, code: 'out-of-range', message: `Enter ${min} to ${max}.`, limit: `${min} to ${max}` }]
}
