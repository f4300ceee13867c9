import { useQuery } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { PathwayList } from '#server/presenters/pathway'
import type { PatientPage } from '#server/presenters/patient'
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
