import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { DayListView, TheatreDay } from '#server/presenters/theatre'
import type { AddListBody, ChangeCaseBody, ChangeListBody, OrderListBody } from '#shared/contracts/theatre'

export const theatreKeys = {
  day: (siteId: MaybeRefOrGetter<string | undefined>, date: MaybeRefOrGetter<string | undefined>) => ['theatre', 'day', siteId, date] as const,
  list: (id: MaybeRefOrGetter<string>) => ['theatre', 'list', id] as const,
}

/** One site's theatre of one day. Asked again every minute: what is under way moves the finish. */
export function useTheatreDay(siteId: MaybeRefOrGetter<string | undefined>, date: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: theatreKeys.day(siteId, date), queryFn: () => api<TheatreDay>('/api/theatre', { query: { siteId: toValue(siteId), date: toValue(date) } }), refetchInterval: 60_000, placeholderData: previous => previous })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export interface PrintedList extends DayListView { siteName: string, zone: string, printedAt: string }

/** One list as it is printed. */
export function usePrintedList(id: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: theatreKeys.list(id), queryFn: () => api<PrintedList>(`/api/theatre/list/${toValue(id)}`), retry: false })
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
