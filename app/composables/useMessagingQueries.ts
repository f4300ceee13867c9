import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { Conversation, ReplyList } from '#server/presenters/messaging'
import type { LinkPage } from '#shared/contracts/messaging'
import type { SymptomId, SymptomRoute } from '#shared/domain/messaging/symptoms'

export const messagingKeys = {
  link: (token: string) => ['messaging', 'link', token] as const,
  replies: ['messaging', 'replies'] as const,
  conversation: (patientId: string) => ['messaging', 'conversation', patientId] as const,
}

/** The patient's own page. */
export function usePatientLink(token: string) {
  const api = useApi()
  const client = useQueryClient()
  const base = `/api/messaging/link/${encodeURIComponent(token)}`
  const query = useQuery({ queryKey: messagingKeys.link(token), queryFn: () => api<LinkPage>(base), retry: 1 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  const onSuccess = () => client.invalidateQueries({ queryKey: messagingKeys.link(token) })
  const open = useMutation({ mutationFn: (birthDate: string) => api(`${base}/open`, { method: 'POST', body: { birthDate } }), onSuccess })
  const answer = useMutation({ mutationFn: (input: { visitId: string, answer: 'coming' | 'cannot-come' }) => api(`${base}/answer`, { method: 'POST', body: input }), onSettled: onSuccess })
  const tell = useMutation({ mutationFn: (chosen: SymptomId[]) => api<{ route: SymptomRoute }>(`${base}/symptoms`, { method: 'POST', body: { symptoms: chosen, nothingOfThese: chosen.length === 0 } }), onSettled: onSuccess })
  return { query, open, answer, tell }
}

export function useReplies() {
  const api = useApi()
  const query = useQuery({ queryKey: messagingKeys.replies, queryFn: () => api<ReplyList>('/api/messaging/replies'), refetchInterval: 15_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export function useConversation(patientId: MaybeRefOrGetter<string | null>) {
  const api = useApi()
  return useQuery({
    queryKey: computed(() => messagingKeys.conversation(toValue(patientId) ?? '')), enabled: computed(() => Boolean(toValue(patientId))),
    queryFn: () => api<Conversation>(`/api/messaging/conversation/${toValue(patientId)}`), refetchInterval: 15_000,
  })
}

export function useMessagingActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => client.invalidateQueries({ queryKey: ['messaging'] })
  const write = useMutation({ mutationFn: (input: { patientId: string, words: string, key: string }) => api(`/api/messaging/conversation/${input.patientId}`, { method: 'POST', body: { words: input.words, key: input.key } }), onSettled })
  const handle = useMutation({ mutationFn: (input: { id: string, words: string }) => api(`/api/messaging/replies/${input.id}/handle`, { method: 'POST', body: { words: input.words } }), onSettled })
  const settle = useMutation({ mutationFn: (input: { id: string, words: string }) => api(`/api/messaging/messages/${input.id}/settle`, { method: 'POST', body: { words: input.words } }), onSettled })
  return { write, handle, settle }
}
