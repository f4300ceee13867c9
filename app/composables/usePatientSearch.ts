import { useQuery } from '@tanstack/vue-query'
import { useDebounceFn } from '@vueuse/core'

export interface FoundPatient { id: string, name: string, recordNumber: string, birthDate: string }

/** Find a patient by name, record number, telephone or birth date, as one types. */
export function usePatientSearch() {
  const api = useApi()
  const query = ref('')
  const settled = ref('')
  const settle = useDebounceFn(() => {
    settled.value = query.value.trim()
  }, 180)
  watch(query, settle)
  const enabled = computed(() => settled.value.length >= 2)
  const found = useQuery({
    queryKey: ['patient', 'find', settled],
    queryFn: () => api<{ items: FoundPatient[] }>('/api/patient', { query: { find: settled.value } }),
    enabled,
  })
  const results = computed(() => enabled.value ? (found.data.value?.items ?? []).map(each => ({ ...each, detail: `Born ${each.birthDate}, record ${each.recordNumber}` })) : [])
  const state = computed(() => !enabled.value ? 'idle' as const : found.isError.value ? 'failed' as const : found.isPending.value ? 'searching' as const : 'ready' as const)
  return { query, results, state }
}
