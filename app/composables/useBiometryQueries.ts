import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { BiometryView, LensCheckView, LensPlanView } from '#server/presenters/biometry'
import type { CheckLensBody, RecordBiometryBody, SignLensPlanBody } from '#shared/contracts/biometry'

/** The acts on the measurements and the lens plan of one pathway. */
export function useBiometryActs(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['pathway', 'patient'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const post = <T, B extends object>(last: string) => useMutation({ mutationFn: (body: B) => api<T>(`/api/biometry/${toValue(pathwayId)}${last}`, { method: 'POST', body }), onSettled }).mutateAsync
  return {
    record: post<BiometryView, RecordBiometryBody>(''),
    explain: post<BiometryView, { biometryId: string, ruleId: string, words: string }>('/explain'),
    accept: post<BiometryView, { biometryId: string }>('/accept'),
    signPlan: post<LensPlanView, SignLensPlanBody>('/lens-plan'),
  }
}

/** The second check of the lens that is being chosen, asked again whenever the choice changes. It stores nothing. */
export function useLensCheck(pathwayId: MaybeRefOrGetter<string>, choice: MaybeRefOrGetter<CheckLensBody | undefined>) {
  const api = useApi()
  return useQuery({
    queryKey: ['biometry', 'check', pathwayId, choice] as const,
    queryFn: () => api<LensCheckView>(`/api/biometry/${toValue(pathwayId)}/second-check`, { method: 'POST', body: toValue(choice) }),
    enabled: () => toValue(choice) !== undefined,
    placeholderData: keepPreviousData,
    retry: false,
  })
}
