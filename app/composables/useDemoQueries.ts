import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { DemoState } from '#server/presenters/demo'

const demoKey = ['demo'] as const

/** The demo's telephones, mail, faults and clock. */
export function useDemo() {
  const api = useApi()
  const client = useQueryClient()
  const query = useQuery({ queryKey: demoKey, queryFn: () => api<DemoState>('/api/demo/state'), refetchInterval: 1_500, retry: 0 })
  const onSettled = () => client.invalidateQueries({ queryKey: demoKey })
  const reply = useMutation({ mutationFn: (input: { from: string, body: string }) => api('/api/demo/reply', { method: 'POST', body: input }), onSettled })
  const fault = useMutation({ mutationFn: (input: { mode?: string, failing?: string[], refuseMail?: boolean }) => api('/api/demo/fault', { method: 'POST', body: input }), onSettled })
  const clock = useMutation({ mutationFn: (minutes: number) => api('/api/demo/clock', { method: 'POST', body: { minutes } }), onSettled })
  return { query, reply, fault, clock }
}
