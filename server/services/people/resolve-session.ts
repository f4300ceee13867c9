import { and, eq, gt, isNull, sql } from 'drizzle-orm'
import { people, roles, sessions } from '#server/db/schema/index'
import type { SystemContext } from '#server/services/context'
import { cachedActor, rememberActor } from '#server/services/people/session-cache'
import { hashSecret } from '#server/services/people/tokens'
import type { Actor } from '#shared/domain/people/vocabulary'

export const idleMinutes = 30
export const absoluteHours = 12
const touchEveryMs = 60_000

/** Who holds this session, or undefined when it is unknown, ended, idle too long or its person disabled. */
export async function resolveSession(ctx: SystemContext, sessionId: string): Promise<Actor | undefined> {
  const idHash = hashSecret(sessionId)
  const cached = cachedActor(idHash, ctx.now.getTime())
  if (cached) return cached

  const rows = await ctx.db.select({ personId: people.id, name: people.name, lastSeenAt: sessions.lastSeenAt, role: roles.role, siteId: roles.siteId, practiceId: roles.practiceId })
    .from(sessions)
    .innerJoin(people, eq(people.id, sessions.personId))
    .leftJoin(roles, eq(roles.personId, people.id))
    .where(and(eq(sessions.idHash, idHash), isNull(sessions.revokedAt), isNull(people.disabledAt), gt(sessions.expiresAt, ctx.now),
      gt(sessions.lastSeenAt, new Date(ctx.now.getTime() - idleMinutes * 60_000))))
  const first = rows[0]
  if (!first) return undefined

  const actor: Actor = { personId: first.personId, name: first.name, roles: rows.flatMap(row => row.role ? [{ role: row.role, siteId: row.siteId, practiceId: row.practiceId }] : []) }
  if (ctx.now.getTime() - first.lastSeenAt.getTime() > touchEveryMs) {
    await ctx.db.update(sessions).set({ lastSeenAt: sql`greatest(${sessions.lastSeenAt}, ${ctx.now.toISOString()}::timestamptz)` }).where(eq(sessions.idHash, idHash))
  }
  rememberActor(idHash, actor, ctx.now.getTime(), first.lastSeenAt.getTime() + idleMinutes * 60_000)
  return actor
}
