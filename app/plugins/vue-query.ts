import type { DehydratedState } from '@tanstack/vue-query'
import { dehydrate, hydrate, QueryClient, VueQueryPlugin } from '@tanstack/vue-query'

/** One client per request: a shared one could hand one person's records to another. */
export default defineNuxtPlugin((nuxt) => {
  const state = useState<DehydratedState | null>('vue-query', () => null)
  const client = new QueryClient({
    defaultOptions: {
      queries: {
        staleTime: 5_000,
        gcTime: import.meta.server ? Infinity : 300_000,
        refetchOnWindowFocus: true,
        retry: (count, error) => count < 2 && !(error instanceof ApiProblem && error.status >= 400),
      },
    },
  })
  nuxt.vueApp.use(VueQueryPlugin, { queryClient: client })
  if (import.meta.server) {
    nuxt.hooks.hook('app:rendered', () => {
      state.value = dehydrate(client)
      client.clear()
    })
  }
  if (import.meta.client && state.value) hydrate(client, state.value)
  return { provide: { queryClient: client } }
})
