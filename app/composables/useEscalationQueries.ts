import { useInfiniteQuery, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { EscalationItem } from '#server/presenters/escalation'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

export const escalationKeys = { open: ['escalation', 'open'] as const, closed: ['escalation', 'closed'] as const }
interface EscalationList { items: EscalationItem[], next: { before: string, beforeId: string } | null, now: string }

export function useEscalations() {
  const api = useApi()
  const query = useQuery({ queryKey: escalationKeys.open, queryFn: () => api<EscalationList>('/api/escalation'), refetchInterval: 15_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** Closed ones, newest first, a page at a time. */
export function useClosedEscalations(enabled: MaybeRefOrGetter<boolean>) {
  const api = useApi()
  return useInfiniteQuery({
    queryKey: escalationKeys.closed,
    queryFn: ({ pageParam }) => api<EscalationList>('/api/escalation', { query: { show: 'closed', limit: 20, ...pageParam } }),
    initialPageParam: {} as { before?: string, beforeId?: string },
    getNextPageParam: page => page.next ?? undefined,
    enabled: () => toValue(enabled),
  })
}

export function useEscalationActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['escalation', 'me', 'visit', 'pathway'].map(area => client.invalidateQueries({ queryKey: [area] })))
  const acknowledge = useMutation({ mutationFn: (input: { id: string, plan: string, rowVersion: number }) => api(`/api/escalation/${input.id}/acknowledge`, { method: 'POST', body: { plan: input.plan, rowVersion: input.rowVersion } }), onSettled })
  const takeOver = useMutation({ mutationFn: (input: { id: string, rowVersion: number }) => api(`/api/escalation/${input.id}/take-over`, { method: 'POST', body: { rowVersion: input.rowVersion } }), onSettled })
  const record = useMutation({ mutationFn: (input: { id: string, words: string, rowVersion: number }) => api(`/api/escalation/${input.id}/record`, { method: 'POST', body: { words: input.words, rowVersion: input.rowVersion } }), onSettled })
  const close = useMutation({ mutationFn: (input: { id: string, words: string, rowVersion: number }) => api(`/api/escalation/${input.id}/close`, { method: 'POST', body: { words: input.words, rowVersion: input.rowVersion } }), onSettled })
  const raise = useMutation({ mutationFn: (body: { pathwayId: string, urgency: Urgency, words: string }) => api<{ id: string, number: number }>('/api/escalation', { method: 'POST', body }), onSettled })
  return { acknowledge, takeOver, record, close, raise }
}
