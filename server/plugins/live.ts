import { startLive } from '#server/utils/live'

export default defineNitroPlugin((nitro) => {
  if (import.meta.prerender || !process.env.DATABASE_URL) return
  const stop = startLive()
  nitro.hooks.hook('close', stop)
})
