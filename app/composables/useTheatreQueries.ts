import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { SafetyCheckView } from '#server/presenters/safety-check'
import type { PrintedListView, TheatreDay } from '#server/presenters/theatre'
import type { SafetyAnswers, SafetyStep } from '#shared/domain/theatre/safety-check'
import type { AddListBody, ChangeCaseBody, ChangeListBody, LensScanBody, OrderListBody } from '#shared/contracts/theatre'

export const theatreKeys = {
  day: (siteId: MaybeRefOrGetter<string | undefined>, date: MaybeRefOrGetter<string | undefined>) => ['theatre', 'day', siteId, date] as const,
  list: (id: MaybeRefOrGetter<string>) => ['theatre', 'list', id] as const,
  check: (caseId: MaybeRefOrGetter<string>) => ['theatre', 'check', caseId] as const,
}

/** One site's theatre of one day. Asked again every minute: what is under way moves the finish. */
export function useTheatreDay(siteId: MaybeRefOrGetter<string | undefined>, date: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: theatreKeys.day(siteId, date), queryFn: () => api<TheatreDay>('/api/theatre', { query: { siteId: toValue(siteId), date: toValue(date) } }), refetchInterval: 60_000, placeholderData: previous => previous })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** One list as it is printed. */
export function usePrintedList(id: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: theatreKeys.list(id), queryFn: () => api<PrintedListView>(`/api/theatre/list/${toValue(id)}`), retry: false })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** The acts on lists and cases. Each refetches what it changed; nothing is faked on screen. */
export function useTheatreActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all([client.invalidateQueries({ queryKey: ['theatre'] }), client.invalidateQueries({ queryKey: ['pathway'] })])
  const addList = useMutation({ mutationFn: (body: AddListBody) => api<{ id: string, startsAt: string }>('/api/theatre', { method: 'POST', body }), onSettled })
  const changeList = useMutation({ mutationFn: ({ id, ...body }: ChangeListBody & { id: string }) => api(`/api/theatre/list/${id}`, { method: 'PUT', body }), onSettled })
  const addCase = useMutation({ mutationFn: ({ listId, ...body }: { listId: string, pathwayId: string, reason: string }) => api<{ id: string }>(`/api/theatre/list/${listId}/case`, { method: 'POST', body }), onSettled })
  const cancelCase = useMutation({ mutationFn: ({ id, reason }: { id: string, reason: string }) => api(`/api/theatre/case/${id}/cancel`, { method: 'POST', body: { reason } }), onSettled })
  const replaceCase = useMutation({ mutationFn: ({ id, ...body }: { id: string, pathwayId: string, reason: string }) => api(`/api/theatre/case/${id}/replace`, { method: 'POST', body }), onSettled })
  const changeCase = useMutation({ mutationFn: ({ id, ...body }: ChangeCaseBody & { id: string }) => api(`/api/theatre/case/${id}`, { method: 'PUT', body }), onSettled })
  const order = useMutation({ mutationFn: ({ id, ...body }: OrderListBody & { id: string }) => api(`/api/theatre/list/${id}/order`, { method: 'PUT', body }), onSettled })
  const lock = useMutation({ mutationFn: ({ id, act, rowVersion }: { id: string, act: 'lock' | 'unlock', rowVersion: number }) => api(`/api/theatre/list/${id}/${act}`, { method: 'POST', body: { rowVersion } }), onSettled })
  return { addList, changeList, addCase, cancelCase, replaceCase, changeCase, order, lock }
}

/** The safety check of one case, and what is done to it. Every act answers with the whole check as it then is. */
export function useSafetyCheck(caseId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const path = (part: string) => `/api/theatre/case/${toValue(caseId)}/${part}`
  const query = useQuery({ queryKey: theatreKeys.check(caseId), queryFn: () => api<SafetyCheckView>(path('safety')), retry: false, refetchInterval: 20_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  const onSuccess = (view: SafetyCheckView) => {
    client.setQueryData(['theatre', 'check', toValue(caseId)], view)
    return client.invalidateQueries({ queryKey: ['theatre', 'day'] })
  }
  const sign = useMutation({ mutationFn: ({ step, answers }: { step: SafetyStep, answers: SafetyAnswers }) => api<SafetyCheckView>(path(`safety/${step}`), { method: 'POST', body: { answers } }), onSuccess })
  const scan = useMutation({ mutationFn: (body: LensScanBody) => api<SafetyCheckView>(path('lens'), { method: 'POST', body }), onSuccess })
  const explain = useMutation({ mutationFn: (body: { stopId: string, words: string }) => api<SafetyCheckView>(path('explain'), { method: 'POST', body }), onSuccess })
  return { query, sign, scan, explain }
}
