import { useMutation, useQueryClient } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { ReferralBody, TriageBody } from '#shared/contracts/referral'

/** The acts on the referral of one pathway. */
export function useReferralActs(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  const client = useQueryClient()
  const onSettled = () => Promise.all(['pathway', 'referral', 'patient'].map(topic => client.invalidateQueries({ queryKey: [topic] })))
  const change = useMutation({ mutationFn: (body: ReferralBody) => api(`/api/referral/${toValue(pathwayId)}`, { method: 'PUT', body }), onSettled })
  const triage = useMutation({ mutationFn: (body: TriageBody) => api(`/api/referral/${toValue(pathwayId)}/triage`, { method: 'POST', body }), onSettled })
  return { change: change.mutateAsync, triage: triage.mutateAsync }
}
