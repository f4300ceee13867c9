import type { H3Event } from 'h3'
import { createHash } from 'node:crypto'

declare module '#auth-utils' {
  interface SecureSessionData { sessionId?: string }
}

/**
 * The sealed cookie holds only an opaque id. Unsealing costs more than a list query, so a given cookie
 * string is unsealed once per process; the session row stays the judge of whether it still counts.
 */
const unsealed = new Map<string, string>()

export async function readSessionId(event: H3Event): Promise<string | undefined> {
  const header = event.node.req.headers.cookie
  const sealed = header?.match(/(?:^|;\s*)__dawnward=([^;]+)/)?.[1]
  if (!sealed) return undefined
  const key = createHash('sha256').update(sealed).digest('base64')
  const known = unsealed.get(key)
  if (known) return known
  const session = await getUserSession(event)
  const sessionId = session.secure?.sessionId
  if (!sessionId) return undefined
  if (unsealed.size > 10_000) unsealed.clear()
  unsealed.set(key, sessionId)
  return sessionId
}

export async function writeSessionId(event: H3Event, sessionId: string): Promise<void> {
  await replaceUserSession(event, { secure: { sessionId } })
}
