import { defineEventHandler } from 'h3'
import { useDatabase } from '#server/db/client'
import { resolveSession } from '#server/services/people/resolve-session'
import { now } from '#server/utils/clock'
import { readSessionId } from '#server/utils/session-cookie'
import type { Actor } from '#shared/domain/people/vocabulary'

declare module 'h3' {
  interface H3EventContext { actor?: Actor, sessionId?: string }
}

/** One look at the session row per request; pages and API alike read `event.context.actor`. */
export default defineEventHandler(async (event) => {
  if (event.path.startsWith('/_nuxt/') || event.path.startsWith('/webhooks/') || event.path.startsWith('/health')) return
  try {
    const sessionId = await readSessionId(event)
    if (!sessionId) return
    const actor = await resolveSession({ db: useDatabase(), now: now() }, sessionId)
    if (!actor) return
    event.context.actor = actor
    event.context.sessionId = sessionId
  }
  catch {
    // A cookie that cannot be opened, or a database that is away, is nobody: every route then refuses.
    event.context.actor = undefined
  }
})
