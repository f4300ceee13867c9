import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { PathwayList } from '#server/presenters/pathway'
import type { PatientContacts, PatientPage } from '#server/presenters/patient'
import type { ContactsInput } from '#shared/contracts/patient'
import type { Stage } from '#shared/domain/pathway/vocabulary'

export function usePatient(id: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['patient', 'page', id] as const, queryFn: () => api<PatientPage>(`/api/patient/${toValue(id)}`) })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

export function usePathways(stage: MaybeRefOrGetter<Stage | undefined>, after: MaybeRefOrGetter<string | undefined>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['pathway', 'list', stage, after] as const, queryFn: () => api<PathwayList>('/api/pathway', { query: { stage: toValue(stage), after: toValue(after) } }), placeholderData: previous => previous })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** How a patient can be reached, changed. What waits to be sent follows at once. */
export function usePatientActs(patientId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['patient', 'pathway', 'message'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const changeContacts = useMutation({ mutationFn: (body: ContactsInput) => api<PatientContacts>(`/api/patient/${toValue(patientId)}/contacts`, { method: 'PUT', body }), onSettled })
  return { changeContacts: changeContacts.mutateAsync }
}
