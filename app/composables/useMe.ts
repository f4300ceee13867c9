import { useQuery } from '@tanstack/vue-query'
import type { MeResponse } from '#shared/contracts/people'

export const meKey = ['me'] as const

/** The signed-in person, or null. One query for the whole page frame. */
export function useMe() {
  const api = useApi()
  const query = useQuery({
    queryKey: meKey,
    queryFn: async () => {
      try {
        return await api<MeResponse>('/api/people/me')
      }
      catch (error) {
        if (error instanceof ApiProblem && error.status === 401) return null
        throw error
      }
    },
    staleTime: 30_000,
  })
  onServerPrefetch(() => query.suspense())
  const me = computed(() => query.data.value ?? null)
  const can = (...roles: string[]) => me.value?.roles.some(each => roles.includes(each.role)) ?? false
  async function signOut() {
    await api('/api/people/sign-out', { method: 'POST', body: { everywhere: false } }).catch(() => undefined)
    // A full load empties every cache of this page: nothing of the last person stays in memory.
    window.location.assign('/sign-in')
  }
  return { me, can, signOut, isReady: query.isFetched, refetch: query.refetch }
}
