import { useInfiniteQuery, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { Conversation, GoingOut, ReplyList } from '#server/presenters/messaging'
import type { TemplateList } from '#server/presenters/messaging-templates'
import type { LinkPage, Told } from '#shared/contracts/messaging'
import type { SymptomRoute } from '#shared/domain/messaging/symptoms'
import type { Language } from '#shared/domain/messaging/vocabulary'

export const messagingKeys = {
  link: (token: string) => ['messaging', 'link', token] as const,
  replies: ['messaging', 'replies'] as const,
  goingOut: ['messaging', 'going-out'] as const,
  templates: ['messaging', 'templates'] as const,
  conversation: (patientId: string) => ['messaging', 'conversation', patientId] as const,
}

/** The patient's own page, in a language that may be changed; unset it is the patient's own. */
export function usePatientLink(token: string, asked: Language | undefined) {
  const api = useApi()
  const client = useQueryClient()
  const base = `/api/messaging/link/${encodeURIComponent(token)}`
  const language = ref<Language | undefined>(asked)
  const query = useQuery({ queryKey: computed(() => [...messagingKeys.link(token), language.value ?? '']), queryFn: () => api<LinkPage>(base, { query: { language: language.value } }), retry: 1, placeholderData: (before: LinkPage | undefined) => before })
  const onSuccess = () => client.invalidateQueries({ queryKey: messagingKeys.link(token) })
  const open = useMutation({ mutationFn: (birthDate: string) => api(`${base}/open`, { method: 'POST', body: { birthDate } }), onSuccess })
  const answer = useMutation({ mutationFn: (input: { visitId: string, answer: 'coming' | 'cannot-come' }) => api(`${base}/answer`, { method: 'POST', body: input }), onSettled: onSuccess })
  const tell = useMutation({ mutationFn: (told: Told) => api<{ route: SymptomRoute }>(`${base}/symptoms`, { method: 'POST', body: told }), onSettled: onSuccess })
  return { query, language, open, answer, tell }
}

export function useReplies() {
  const api = useApi()
  const query = useQuery({ queryKey: messagingKeys.replies, queryFn: () => api<ReplyList>('/api/messaging/replies'), refetchInterval: 15_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** What goes out on this day, loaded when its page is looked at. */
export function useGoingOut(wanted: MaybeRefOrGetter<boolean>) {
  const api = useApi()
  return useInfiniteQuery({
    queryKey: messagingKeys.goingOut, enabled: computed(() => toValue(wanted)), refetchInterval: 30_000, initialPageParam: '',
    queryFn: ({ pageParam }) => api<GoingOut>('/api/messaging/going-out', { query: pageParam ? { after: pageParam } : {} }), getNextPageParam: last => last.next ?? undefined,
  })
}

export function useTemplates(language: MaybeRefOrGetter<Language>, wanted: MaybeRefOrGetter<boolean>) {
  const api = useApi()
  return useQuery({ queryKey: computed(() => [...messagingKeys.templates, toValue(language)]), enabled: computed(() => toValue(wanted)), queryFn: () => api<TemplateList>('/api/messaging/templates', { query: { language: toValue(language) } }), staleTime: Infinity })
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
  const again = useMutation({ mutationFn: (id: string) => api(`/api/messaging/messages/${id}/again`, { method: 'POST', body: {} }), onSettled })
  return { write, handle, settle, again }
}
