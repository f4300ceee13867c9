import { followDemoClock, runWorker } from '#server/jobs/run-worker'

export default defineNitroPlugin((nitro) => {
  if (import.meta.prerender || !process.env.DATABASE_URL) return
  if (process.env.DAWNWARD_WORKER === 'none') {
    const timer = setInterval(() => void followDemoClock().catch(() => undefined), 500)
    nitro.hooks.hook('close', () => clearInterval(timer))
    return
  }
  const stop = runWorker()
  nitro.hooks.hook('close', stop)
})
