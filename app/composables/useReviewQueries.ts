import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { ReviewSheet } from '#server/presenters/review'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

export const reviewKeys = { sheet: (visitId: MaybeRefOrGetter<string>) => ['review', 'sheet', visitId] as const }

export function useReviewSheet(visitId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: reviewKeys.sheet(visitId), queryFn: () => api<ReviewSheet>(`/api/review/${toValue(visitId)}`), refetchOnWindowFocus: false, staleTime: 60_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export interface SignedAnswer { version: number, urgency: Urgency | null, escalation: { id: string, number: number } | null, unchecked: string[] }

export function useReviewActs(visitId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const path = () => `/api/review/${toValue(visitId)}`
  const onSuccess = () => Promise.all(['review', 'visit', 'escalation', 'pathway', 'me'].map(area => client.invalidateQueries({ queryKey: [area] })))
  const saveDraft = useMutation({ mutationFn: (body: { findings: ReviewFindings, rowVersion: number | null }) => api<{ rowVersion: number, savedAt: string }>(`${path()}/draft`, { method: 'PUT', body }) })
  const sign = useMutation({ mutationFn: (body: { findings: ReviewFindings, confirmedDoubts: string[] }) => api<SignedAnswer>(`${path()}/sign`, { method: 'POST', body }), onSuccess })
  const amend = useMutation({ mutationFn: (body: { findings: ReviewFindings, reason: string, baseVersion: number, confirmedDoubts: string[] }) => api<SignedAnswer>(`${path()}/amend`, { method: 'POST', body }), onSuccess })
  return { saveDraft, sign, amend }
}
