import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { AttachmentsView } from '#server/presenters/attachment'
import type { MergesView } from '#server/presenters/patient-merge'
import type { ImportRowsPage, ImportsPage, ImportView } from '#server/presenters/referral-import'
import type { AlikeView, TriagePage } from '#server/presenters/triage'
import type { ReferralBody, TriageBody } from '#shared/contracts/referral'
import type { RowFate } from '#shared/domain/referral/import-row'

/** The acts on the referral of one pathway. */
export function useReferralActs(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['pathway', 'referral', 'patient'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const change = useMutation({ mutationFn: (body: ReferralBody) => api(`/api/referral/${toValue(pathwayId)}`, { method: 'PUT', body }), onSettled })
  const triage = useMutation({ mutationFn: (body: TriageBody) => api(`/api/referral/${toValue(pathwayId)}/triage`, { method: 'POST', body }), onSettled })
  return { change: change.mutateAsync, triage: triage.mutateAsync }
}

export function useTriage(after: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['referral', 'triage', after] as const, queryFn: () => api<TriagePage>('/api/referral', { query: { after: toValue(after) } }), placeholderData: previous => previous })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** People who may be the person of this referral; asked for the open one only. */
export function useAlike(pathwayId: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  return useQuery({ queryKey: ['referral', 'alike', pathwayId] as const, queryFn: () => api<AlikeView>(`/api/referral/${toValue(pathwayId)}`), enabled: () => Boolean(toValue(pathwayId)) })
}

export function useMerges(patientId: MaybeRefOrGetter<string>) {
  const api = useApi()
  return useQuery({ queryKey: ['patient', 'merges', patientId] as const, queryFn: () => api<MergesView>(`/api/patient/${toValue(patientId)}/merges`) })
}

export interface Decision { id: string, decision: 'accepted' | 'returned' | 'declined', note: string, redFlags: Record<string, boolean>, priority: 'routine' | 'soon' | 'urgent', rowVersion: number, fellow?: { pathwayId: string, rowVersion: number } }

export function useTriageActs() {
  const api = useApi()
  const client = useQueryClient()
  /** Not waited for: the refetch takes the decided referral off the page, and what was done is said before that. */
  const onSettled = () => {
    for (const area of ['referral', 'pathway', 'patient']) void client.invalidateQueries({ queryKey: [area] })
  }
  const triage = useMutation({ mutationFn: ({ id, ...body }: Decision) => api<{ question: 'queued' | 'no-address' | null }>(`/api/referral/${id}/triage`, { method: 'POST', body }), onSettled })
  const merge = useMutation({ mutationFn: ({ keptId, ...body }: { keptId: string, mergedId: string, reason: string, keptRowVersion: number, mergedRowVersion: number }) => api<{ mergeId: string }>(`/api/patient/${keptId}/merge`, { method: 'POST', body }), onSettled })
  const unmerge = useMutation({ mutationFn: ({ mergeId, reason }: { mergeId: string, reason: string }) => api(`/api/patient/merge/${mergeId}/undo`, { method: 'POST', body: { reason } }), onSettled })
  return { triage, merge, unmerge }
}

export function useAttachments(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const query = useQuery({ queryKey: ['referral', 'attachments', pathwayId] as const, queryFn: () => api<AttachmentsView>(`/api/referral/${toValue(pathwayId)}/attachments`) })
  const add = useMutation({ mutationFn: (file: File) => api(`/api/referral/${toValue(pathwayId)}/attachments`, { method: 'POST', body: formOf(file) }), onSettled: () => client.invalidateQueries({ queryKey: ['referral', 'attachments'] }) })
  return { ...query, add }
}

/** The last files with how far each is; asked again and again while one is being looked at. */
export function useImports(isBusy: MaybeRefOrGetter<boolean>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['referral', 'imports'] as const, queryFn: () => api<ImportsPage>('/api/referral/import'), refetchInterval: () => toValue(isBusy) ? 500 : false })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export function useImportRows(id: MaybeRefOrGetter<string | undefined>, fate: MaybeRefOrGetter<RowFate | undefined>, after: MaybeRefOrGetter<number>) {
  const api = useApi()
  return useQuery({ queryKey: ['referral', 'import-rows', id, fate, after] as const, queryFn: () => api<ImportRowsPage>(`/api/referral/import/${toValue(id)}`, { query: { fate: toValue(fate), after: toValue(after) } }), enabled: () => Boolean(toValue(id)), placeholderData: previous => previous })
}

export function useImportActs() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => client.invalidateQueries({ queryKey: ['referral'] })
  const check = useMutation({ mutationFn: ({ siteId, file }: { siteId: string, file: File }) => api<ImportView>('/api/referral/import', { method: 'POST', query: { siteId }, body: formOf(file) }), onSettled })
  const takeBundle = useMutation({ mutationFn: ({ siteId, file }: { siteId: string, file: File }) => api<{ patients: number, pathwayCount: number }>('/api/referral/fhir', { method: 'POST', query: { siteId }, body: formOf(file) }), onSettled })
  const commit = useMutation({ mutationFn: (id: string) => api<{ pathwayCount: number }>(`/api/referral/import/${id}/commit`, { method: 'POST', body: {} }), onSettled })
  return { check, takeBundle, commit }
}

function formOf(file: File): FormData {
  const form = new FormData()
  form.append('file', file)
  return form
}
