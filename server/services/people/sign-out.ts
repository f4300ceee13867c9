import { and, eq, isNull } from 'drizzle-orm'
import { sessions } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { forgetSessions } from '#server/services/people/session-cache'
import { hashSecret } from '#server/services/people/tokens'

/** Ends this session, or with `everywhere` each session of the person. */
export async function signOut(ctx: ServiceContext, input: { sessionId: string, everywhere: boolean }): Promise<void> {
  await ctx.db.transaction(async (tx) => {
    const which = input.everywhere ? eq(sessions.personId, ctx.actor.personId) : eq(sessions.idHash, hashSecret(input.sessionId))
    await tx.update(sessions).set({ revokedAt: ctx.now }).where(and(which, isNull(sessions.revokedAt)))
    await appendAudit(tx, { at: ctx.now, event: input.everywhere ? 'people.signed-out-everywhere' : 'people.signed-out', personId: ctx.actor.personId, subjectKind: 'person', subjectId: ctx.actor.personId })
  })
  forgetSessions()
}
