import type { LogNormalMinutes } from '#shared/domain/theatre/duration'
import type { ListForecast } from '#shared/domain/theatre/list-forecast'
import { forecastList } from '#shared/domain/theatre/list-forecast'
import { lastMinute } from '#shared/domain/theatre/list-plan'

/** Between the end of one case and the start of the next, in minutes. 'common practice': a site's own figure may replace it. */
export const turnoverMinutes = 10

export const caseStates = ['planned', 'in-theatre', 'done', 'cancelled'] as const
export type CaseState = typeof caseStates[number]

/** One case of a list, in order. Instants are ISO text, so that the server and the page hand in the same thing. */
export interface DayCase {
  id: string
  state: CaseState
  plannedMinutes: number
  duration: LogNormalMinutes
  startedAt: string | null
  endedAt: string | null
  /** Minutes from the start of the list before which it cannot begin: the interpreter or the anaesthetist is not there yet. */
  notBeforeMinute?: number | null
}
export interface DayList { startsAt: string, endsAt: string, cases: readonly DayCase[] }

export interface PlannedSpan { id: string, startMinute: number, endMinute: number }

export const isOver = (one: Pick<DayCase, 'state' | 'endedAt'>) => one.state === 'done' || one.endedAt !== null
const isUnderWay = (one: DayCase) => one.state === 'in-theatre' && one.endedAt === null

/** When each case is to start and end, in minutes from the start of the list, by the minutes it was planned with: the times that patients are told. */
export function plannedSpans(cases: readonly Pick<DayCase, 'id' | 'plannedMinutes'>[]): PlannedSpan[] {
  let minute = 0
  return cases.map(({ id, plannedMinutes }) => {
    const startMinute = minute
    minute += plannedMinutes + turnoverMinutes
    return { id, startMinute, endMinute: startMinute + plannedMinutes }
  })
}

/**
 * What is still to come of a list, as it stands at `now` (ISO): finished cases count with the times they took, the one under way is
 * known to take longer than it has, and a list that should have begun cannot begin in the past. `null` when nothing is to come.
 * The page and the server ask this same function, so that dragging a case answers at once with what the server would say.
 */
export function forecastDay(list: DayList, now: string): ListForecast | null {
  const toCome = list.cases.filter(one => one.state !== 'cancelled' && !isOver(one))
  if (!toCome.length) return null
  const minute = (at: string) => (Date.parse(at) - Date.parse(list.startsAt)) / 60_000
  const nowMinute = minute(now)
  const underWay = toCome.find(isUnderWay)
  const ordered = [...underWay ? [underWay] : [], ...toCome.filter(one => one !== underWay)].slice(0, 60)
  const free = freeFrom(list.cases.filter(one => one.state !== 'cancelled' && isOver(one)), minute)
  const within = (value: number, most: number) => Math.min(most, Math.max(0, value))
  return forecastList({
    cases: ordered.map(({ id, duration, notBeforeMinute }) => ({ id, duration, ...(notBeforeMinute ? { notBeforeMinute: within(notBeforeMinute, lastMinute) } : {}) })),
    turnoverMinutes,
    endMinute: within(minute(list.endsAt), lastMinute),
    ...(underWay?.startedAt
      ? { startMinute: within(minute(underWay.startedAt), lastMinute), elapsedMinutes: within(nowMinute - minute(underWay.startedAt), 600) }
      // A day that is over was not run from here: its cases are left where they were planned.
      : { startMinute: within(nowMinute > minute(list.endsAt) ? free : Math.max(free, nowMinute), lastMinute) }),
  })
}

/** The first minute at which the next case can begin after those that are over. */
function freeFrom(over: readonly DayCase[], minute: (at: string) => number): number {
  const ends = over.flatMap(one => one.endedAt ? [minute(one.endedAt)] : [])
  if (ends.length) return Math.max(...ends) + turnoverMinutes
  return over.reduce((sum, one) => sum + one.plannedMinutes + turnoverMinutes, 0)
}
