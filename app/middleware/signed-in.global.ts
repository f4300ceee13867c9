import type { MeResponse } from '#shared/contracts/people'

const open = ['/sign-in', '/forgotten', '/reset', '/v/', '/demo']

/** Convenience only: the server decides. A person without a session is sent to sign in and brought back. */
export default defineNuxtRouteMiddleware(async (to) => {
  if (open.some(prefix => to.path === prefix || to.path.startsWith(prefix.endsWith('/') ? prefix : `${prefix}/`))) return
  const client = useNuxtApp().$queryClient
  const known = client.getQueryData<MeResponse | null>(meKey)
  const api = useApi()
  const me = known ?? await client.fetchQuery({ queryKey: meKey, queryFn: () => api<MeResponse>('/api/people/me').catch(() => null), staleTime: 5_000 })
  if (!me) return navigateTo({ path: '/sign-in', query: to.path === '/' ? {} : { back: to.fullPath } })
})
