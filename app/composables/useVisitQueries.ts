import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { Proposal, SharedVisits } from '#server/presenters/booking'
import type { ClinicDay, OpenPlaces, ToBook } from '#server/presenters/visit'

/** Keys hold values, never getters: a getter that answers nothing would be kept as a function, and no page could be sent with it. */
export const visitKeys = {
  day: (siteId: MaybeRefOrGetter<string | undefined>, date: MaybeRefOrGetter<string | undefined>) => computed(() => ['visit', 'day', toValue(siteId) ?? null, toValue(date) ?? null] as const),
  toBook: (siteId: MaybeRefOrGetter<string | undefined>) => computed(() => ['visit', 'to-book', toValue(siteId) ?? null] as const),
  proposal: (siteId: MaybeRefOrGetter<string | undefined>) => computed(() => ['visit', 'proposal', toValue(siteId) ?? null] as const),
  places: (kind: MaybeRefOrGetter<string>) => computed(() => ['visit', 'places', toValue(kind)] as const),
}

/** Where the morning stands: one site's clinic of one day. */
export function useClinicDay(siteId: MaybeRefOrGetter<string | undefined>, date: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: visitKeys.day(siteId, date), queryFn: () => api<ClinicDay>('/api/visit/clinic', { query: { siteId: toValue(siteId), date: toValue(date) } }), refetchInterval: 30_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export function useToBook(siteId: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: visitKeys.toBook(siteId), queryFn: () => api<ToBook>('/api/visit/to-book', { query: { siteId: toValue(siteId) } }), refetchInterval: 60_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** Eyes shared with the caller's practice, with their visits. */
export function useSharedVisits() {
  const api = useApi()
  const query = useQuery({ queryKey: ['visit', 'shared'] as const, queryFn: () => api<SharedVisits>('/api/visit/shared'), refetchInterval: 60_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** One place proposed for each eye that waits. Nothing is booked by asking. */
export function useProposal(siteId: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: visitKeys.proposal(siteId), queryFn: () => api<Proposal>('/api/visit/proposal', { query: { siteId: toValue(siteId) } }), refetchInterval: 60_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export function useOpenPlaces(kind: MaybeRefOrGetter<'day-one' | 'follow-up'>) {
  const api = useApi()
  const query = useQuery({ queryKey: visitKeys.places(kind), queryFn: () => api<OpenPlaces>('/api/visit/open-places', { query: { kind: toValue(kind), days: toValue(kind) === 'day-one' ? 3 : 42 } }) })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

type Step = 'arrived' | 'send-in' | 'missing'

/** The acts of the clinic list. Each refetches what it changed; nothing is faked on screen. */
export function useVisitActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all([client.invalidateQueries({ queryKey: ['visit'] }), client.invalidateQueries({ queryKey: ['pathway'] })])
  const step = useMutation({ mutationFn: (input: { id: string, step: Step, rowVersion: number }) => api(`/api/visit/${input.id}/${input.step}`, { method: 'POST', body: { rowVersion: input.rowVersion } }), onSettled })
  const book = useMutation({ mutationFn: (body: { pathwayId: string, placeId: string, kind: string, despite?: string }) => api<{ id: string, startsAt: string }>('/api/visit', { method: 'POST', body }), onSettled })
  const bookList = useMutation({ mutationFn: (bookings: { pathwayId: string, placeId: string, despite?: string }[]) => api<{ booked: { pathwayId: string, startsAt: string }[], refused: { pathwayId: string, reason: string }[] }>('/api/visit/book-list', { method: 'POST', body: { bookings } }), onSettled })
  const move = useMutation({ mutationFn: (input: { id: string, placeId: string, rowVersion: number }) => api(`/api/visit/${input.id}/move`, { method: 'POST', body: { placeId: input.placeId, rowVersion: input.rowVersion } }), onSettled })
  const cancel = useMutation({ mutationFn: (input: { id: string, reason: string, rowVersion: number }) => api(`/api/visit/${input.id}/cancel`, { method: 'POST', body: { reason: input.reason, rowVersion: input.rowVersion } }), onSettled })
  const logStep = useMutation({ mutationFn: (input: { id: string, step: string, outcome: string }) => api(`/api/visit/${input.id}/missing-step`, { method: 'POST', body: { step: input.step, outcome: input.outcome } }), onSettled })
  return { step, book, bookList, move, cancel, logStep }
}

/** The coordinator's acts on clinic sessions and their places. */
export function useSessionActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => client.invalidateQueries({ queryKey: ['visit'] })
  const add = useMutation({ mutationFn: (body: { siteId: string, kind: string, room: string, startsAt: string, places: number, minutes: number }) => api<{ id: string }>('/api/visit/session', { method: 'POST', body }), onSettled })
  const change = useMutation({ mutationFn: (input: { id: string, room: string, rowVersion: number }) => api(`/api/visit/session/${input.id}`, { method: 'PUT', body: { room: input.room, rowVersion: input.rowVersion } }), onSettled })
  const addPlaces = useMutation({ mutationFn: ({ id, ...body }: { id: string, places: number, minutes: number, rowVersion: number, startsAt?: string }) => api(`/api/visit/session/${id}/places`, { method: 'POST', body }), onSettled })
  const close = useMutation({ mutationFn: (input: { id: string, rowVersion: number }) => api(`/api/visit/session/${input.id}/close`, { method: 'POST', body: { rowVersion: input.rowVersion } }), onSettled })
  const closePlace = useMutation({ mutationFn: (id: string) => api(`/api/visit/place/${id}/close`, { method: 'POST', body: {} }), onSettled })
  return { add, change, addPlaces, close, closePlace }
}
