import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { NoteView, RiskView } from '#server/presenters/theatre'
import type { AmendNoteBody, ConsentBody, RiskBody, SignNoteBody } from '#shared/contracts/theatre'

export interface NoteDefaults {
  last: { anaesthesia: string, incision: string, technique: string, viscoelastics: string } | null
  medians: { cases: number, energyPercentSeconds: number | null, ultrasoundSeconds: number | null }
}

/** What the surgeon usually does, to start a note from. */
export function useNoteDefaults(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['theatre', 'note-defaults', pathwayId] as const, queryFn: () => api<NoteDefaults>(`/api/theatre/pathway/${toValue(pathwayId)}/note-defaults`), staleTime: 300_000 })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** Risk, consent and the operation note of one eye. */
export function useOperationActs(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['pathway', 'patient', 'theatre', 'visit'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const post = <T, B extends object>(last: string) => useMutation({ mutationFn: (body: B) => api<T>(`/api/theatre/pathway/${toValue(pathwayId)}/${last}`, { method: 'POST', body }), onSettled }).mutateAsync
  return {
    assessRisk: post<RiskView, RiskBody>('risk'),
    signConsent: post<{ version: number }, ConsentBody>('consent'),
    signNote: post<NoteView, SignNoteBody>('note'),
    amendNote: post<NoteView, AmendNoteBody>('amend-note'),
  }
}
