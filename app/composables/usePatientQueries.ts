import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { PathwayList } from '#server/presenters/pathway'
import type { PatientContacts, PatientPage } from '#server/presenters/patient'
import type { AddPatientInput, ContactsInput } from '#shared/contracts/patient'
import type { PathwaysQuery } from '#shared/contracts/pathway'

export function usePatient(id: MaybeRefOrGetter<string>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['patient', 'page', id] as const, queryFn: () => api<PatientPage>(`/api/patient/${toValue(id)}`) })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** What the horizon holds, by the filter that its page chose. */
export function usePathways(filter: MaybeRefOrGetter<PathwaysQuery>) {
  const api = useApi()
  const query = useQuery({ queryKey: ['pathway', 'list', filter] as const, queryFn: () => api<PathwayList>('/api/pathway', { query: { ...toValue(filter) } }), placeholderData: previous => previous })
  onServerPrefetch(() => query.suspense().catch(() => undefined))
  return query
}

/** A new patient with one pathway for each referred eye, or new pathways for somebody who is here. */
export function useAddPatient() {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['patient', 'pathway', 'referral'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const { mutateAsync } = useMutation({ mutationFn: (body: AddPatientInput) => api<{ patientId: string, pathwayIds: string[] }>('/api/patient', { method: 'POST', body }), onSettled })
  return mutateAsync
}

/** How a patient can be reached, changed. What waits to be sent follows at once. */
export function usePatientActs(patientId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['patient', 'pathway', 'message'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const changeContacts = useMutation({ mutationFn: (body: ContactsInput) => api<PatientContacts>(`/api/patient/${toValue(patientId)}/contacts`, { method: 'PUT', body }), onSettled })
  return { changeContacts: changeContacts.mutateAsync }
}
