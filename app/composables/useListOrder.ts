import type { MaybeRefOrGetter } from 'vue'
import type { DayCaseView, DayListView } from '#server/presenters/theatre'
import { forecastDay, isOver, plannedSpans } from '#shared/domain/theatre/day-plan'
import { breachesOf, proposeOrder } from '#shared/domain/theatre/list-breaches'

const ids = (cases: readonly { id: string }[]) => cases.map(one => one.id)

/**
 * The order of one list while somebody tries another: the page asks the same forecast as the server, so that every move answers at
 * once. Nothing is sent until it is saved; what was tried stays when the server refuses it.
 */
export function useListOrder(list: MaybeRefOrGetter<DayListView>, zone: MaybeRefOrGetter<string>, now: MaybeRefOrGetter<string>) {
  const tried = ref<string[] | null>(null)
  /** The list version on which the trying began. */
  const base = ref(0)
  const waiting = computed(() => toValue(list).cases.filter(one => one.state === 'planned'))
  const before = computed(() => toValue(list).cases.filter(one => one.state !== 'planned'))
  const order = computed(() => {
    const now = ids(waiting.value)
    if (!tried.value) return now
    // Who came or went meanwhile is not lost: the ones gone drop out, the new ones wait at the end until it is saved.
    return [...tried.value.filter(id => now.includes(id)), ...now.filter(id => !tried.value!.includes(id))]
  })
  const isTrying = computed(() => tried.value !== null && order.value.join() !== ids(waiting.value).join())
  const inOrder = (wanted: readonly string[]) => [...before.value, ...wanted.map(id => waiting.value.find(one => one.id === id)).filter((one): one is DayCaseView => one !== undefined)]
  const cases = computed(() => inOrder(order.value))
  const savedCases = computed(() => toValue(list).cases)
  const forecastOf = (some: readonly DayCaseView[]) => forecastDay({ ...toValue(list), cases: some }, toValue(now))
  const forecast = computed(() => forecastOf(cases.value))
  const savedForecast = computed(() => isTrying.value ? forecastOf(savedCases.value) : forecast.value)
  const asked = computed(() => ({ ...toValue(list), zone: toValue(zone), cases: cases.value.map(one => ({ ...one, patientName: one.patient.name })) }))
  const breaches = computed(() => breachesOf(asked.value))
  /** An order that keeps more of what the cases need, to be looked at and saved or left. */
  const proposal = computed(() => breaches.value.length ? proposeOrder(asked.value) : null)

  function move(id: string, to: number): boolean {
    const from = order.value.indexOf(id)
    if (from < 0 || to < 0 || to >= order.value.length || from === to) return false
    if (!tried.value) base.value = toValue(list).rowVersion
    const next = order.value.filter(one => one !== id)
    next.splice(to, 0, id)
    tried.value = next
    return true
  }
  function takeProposal() {
    if (!proposal.value) return
    if (!tried.value) base.value = toValue(list).rowVersion
    tried.value = [...proposal.value]
  }
  function putBack() {
    tried.value = null
  }

  /** When each case is drawn: what happened, and what is now to be expected. */
  const spans = computed(() => {
    const listStart = Date.parse(toValue(list).startsAt)
    const minute = (at: string) => (Date.parse(at) - listStart) / 60_000
    const planned = new Map(plannedSpans(cases.value).map(span => [span.id, span]))
    return cases.value.map((one) => {
      const span = planned.get(one.id)!
      const expected = forecast.value?.cases.find(each => each.id === one.id)
      const from = one.startedAt ? minute(one.startedAt) : expected?.expectedStartMinute ?? span.startMinute
      const to = one.endedAt ? minute(one.endedAt) : isOver(one) ? from + one.plannedMinutes : from + Math.exp(one.duration.logMedian)
      return { id: one.id, plannedStartMinute: span.startMinute, expectedStartMinute: one.startedAt ? null : expected?.expectedStartMinute ?? null, from, to, slowTo: isOver(one) ? null : expected?.slowFinishMinute ?? null }
    })
  })
  return { cases, order, isTrying, base, forecast, savedForecast, breaches, proposal, spans, move, takeProposal, putBack }
}
