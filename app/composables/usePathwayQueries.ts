import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { PathwayChoices, PathwayPage, SavedFilters } from '#server/presenters/pathway'
import type { SavedFilterBody } from '#shared/contracts/pathway'
import type { CloseReason } from '#shared/domain/pathway/vocabulary'

export const pathwayKeys = {
  page: (id: MaybeRefOrGetter<string>) => ['pathway', 'page', id] as const,
  choices: ['pathway', 'choices'] as const,
}

/** One eye's whole pathway: its records, what is missing, and what the caller may do. */
export function usePathway(id: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: pathwayKeys.page(id), queryFn: () => api<PathwayPage>(`/api/pathway/${toValue(id)}`) })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** The sites, surgeons and practices that forms about pathways offer. */
export function usePathwayChoices() {
  const api = useApi()
  const query = useQuery({ queryKey: pathwayKeys.choices, queryFn: () => api<PathwayChoices>('/api/pathway/choices'), staleTime: 300_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

type Moves = {
  'advance': object
  'release': object
  'hold': { reason: string, lookAgainOn: string }
  'close': { reason: CloseReason, words: string }
  'reopen': { reason: string }
  'share': { practiceId: string | null }
  'first-check': { decision: string }
  'first-check-found': { found: string }
  'fellow-eye': { decision: string }
  'letter': object
}
export type PathwayMove = keyof Moves

/** Every act on one pathway that asks for the row version its caller saw. */
export function usePathwayActs(id: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['pathway', 'visit', 'escalation', 'patient', 'message'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const { mutateAsync } = useMutation({ mutationFn: (input: { move: PathwayMove, body: object }) => api(`/api/pathway/${toValue(id)}/${input.move}`, { method: 'POST', body: input.body }), onSettled })
  return {
    move: <M extends PathwayMove>(move: M, body: Moves[M] & { rowVersion: number }) => mutateAsync({ move, body }),
  }
}

/** The caller's own named filters of the horizon. A name given again takes the place of the filter that had it. */
export function useSavedFilters() {
  const api = useApi()
  const client = useQueryClient()
  const query = useQuery({ queryKey: ['pathway', 'filter'] as const, queryFn: () => api<SavedFilters>('/api/pathway/filter'), staleTime: 300_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  const onSettled = () => client.invalidateQueries({ queryKey: ['pathway', 'filter'] })
  const save = useMutation({ mutationFn: (body: SavedFilterBody) => api<SavedFilters>('/api/pathway/filter', { method: 'POST', body }), onSettled })
  const forget = useMutation({ mutationFn: (id: string) => api<SavedFilters>(`/api/pathway/filter/${id}`, { method: 'DELETE' }), onSettled })
  return { data: query.data, save: save.mutateAsync, forget: forget.mutateAsync }
}
