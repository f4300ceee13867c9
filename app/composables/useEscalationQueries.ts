import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { EscalationItem } from '#server/presenters/escalation'

export const escalationKeys = { open: ['escalation', 'open'] as const }

export function useEscalations() {
  const api = useApi()
  const query = useQuery({ queryKey: escalationKeys.open, queryFn: () => api<{ items: EscalationItem[], now: string }>('/api/escalation'), refetchInterval: 15_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export function useEscalationActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['escalation', 'me', 'visit', 'pathway'].map(area => client.invalidateQueries({ queryKey: [area] })))
  const acknowledge = useMutation({ mutationFn: (input: { id: string, plan: string, rowVersion: number }) => api(`/api/escalation/${input.id}/acknowledge`, { method: 'POST', body: { plan: input.plan, rowVersion: input.rowVersion } }), onSettled })
  const takeOver = useMutation({ mutationFn: (input: { id: string, rowVersion: number }) => api(`/api/escalation/${input.id}/take-over`, { method: 'POST', body: { rowVersion: input.rowVersion } }), onSettled })
  const record = useMutation({ mutationFn: (input: { id: string, words: string, rowVersion: number }) => api(`/api/escalation/${input.id}/record`, { method: 'POST', body: { words: input.words, rowVersion: input.rowVersion } }), onSettled })
  const close = useMutation({ mutationFn: (input: { id: string, words: string, rowVersion: number }) => api(`/api/escalation/${input.id}/close`, { method: 'POST', body: { words: input.words, rowVersion: input.rowVersion } }), onSettled })
  return { acknowledge, takeOver, record, close }
}
