/** In production a missing or weak secret stops the start: better no service than one that anybody can enter. */
export default defineNitroPlugin(() => {
  if (import.meta.dev || import.meta.prerender) return
  const password = process.env.NUXT_SESSION_PASSWORD ?? ''
  const weak = password.length < 32 || new Set(password).size < 10
  const problem = !process.env.DATABASE_URL
    ? 'DATABASE_URL is not set.'
    : weak ? 'NUXT_SESSION_PASSWORD must hold at least 32 varied characters.' : ''
  if (!problem) return
  console.error(`Dawnward does not start: ${problem}`)
  process.exit(1)
})
