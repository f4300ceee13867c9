import { sql } from 'drizzle-orm'
import type { Database } from '#server/db/client'

export type LiveTopic = 'escalation' | 'visit' | 'message' | 'pathway' | 'clock'

/**
 * Tells every app process that rows changed, after the commit and with ids only. NOTIFY inside a write
 * transaction would serialise all commits; a lost notification costs a poll interval, nothing more.
 */
export async function notifyLive(db: Database, topic: LiveTopic, siteId: string | null, ids: string[]): Promise<void> {
  await db.execute(sql`select pg_notify('dawnward_live', ${JSON.stringify({ topic, siteId, ids: ids.slice(0, 50) })})`).catch(() => undefined)
}
