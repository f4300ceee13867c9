import type { H3Event } from 'h3'
import { useSession } from 'h3'

/** Half an hour in a sealed cookie that scripts cannot read: after it the birth date is asked again. */
function linkSession(event: H3Event) {
  const password = useRuntimeConfig(event).session.password
  return useSession<{ linkId?: string }>(event, { name: 'dawnward_link', password, maxAge: 30 * 60, cookie: { httpOnly: true, sameSite: 'lax', secure: (process.env.DAWNWARD_ORIGIN ?? '').startsWith('https:'), path: '/' } })
}

export async function readLinkId(event: H3Event): Promise<string | undefined> {
  return (await linkSession(event)).data.linkId
}

export async function writeLinkId(event: H3Event, linkId: string): Promise<void> {
  await (await linkSession(event)).update({ linkId })
}
