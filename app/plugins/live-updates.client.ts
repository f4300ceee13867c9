import { useQueryClient } from '@tanstack/vue-query'

const areasOf: Record<string, string[]> = {
  escalation: ['escalation', 'me', 'visit', 'pathway', 'patient'],
  visit: ['visit', 'pathway', 'patient'],
  message: ['messaging', 'patient', 'visit'],
  pathway: ['pathway', 'patient', 'theatre', 'visit'],
}

/** Refetches what changed elsewhere. After a lost connection everything is asked again, since notes may be gone. */
export default defineNuxtPlugin((nuxt) => {
  const connectedSince = useState<string | null>('live-connected', () => null)
  const lostSince = useState<number | null>('live-lost', () => null)
  let source: EventSource | undefined
  nuxt.hook('app:mounted', () => {
    const client = nuxt.vueApp.runWithContext(() => useQueryClient())
    const { me } = nuxt.runWithContext(() => useMe()) as ReturnType<typeof useMe>
    watch(me, (person) => {
      if (!person) {
        source?.close()
        source = undefined
        return
      }
      if (source) return
      source = new EventSource('/live')
      source.addEventListener('changed', (event) => {
        const { topic } = JSON.parse((event as MessageEvent<string>).data) as { topic: string }
        if (topic === 'everything') return void client.invalidateQueries()
        for (const area of areasOf[topic] ?? []) void client.invalidateQueries({ queryKey: [area] })
      })
      source.addEventListener('beat', () => {
        if (lostSince.value !== null) void client.invalidateQueries()
        lostSince.value = null
        connectedSince.value ??= 'yes'
      })
      source.onerror = () => {
        lostSince.value ??= performance.now()
      }
    }, { immediate: true })
  })
})
