import { eq, sql } from 'drizzle-orm'
import { people, sessions } from '#server/db/schema/index'
import { verifyPassword } from '#server/gateways/passwords'
import { appendAudit } from '#server/services/audit/append-audit'
import type { SystemContext } from '#server/services/context'
import { absoluteHours } from '#server/services/people/resolve-session'
import { hashSecret, newSecret } from '#server/services/people/tokens'
import { DomainError } from '#shared/domain/errors'

const triesBeforeLock = 8
const lockMinutes = 15

export interface SignInInput { email: string, password: string, userAgent: string }

/**
 * Opens a session. A wrong password, an unknown address, a disabled and a locked account all get the same
 * words, so that nobody learns which addresses have accounts.
 */
export async function signIn(ctx: SystemContext, input: SignInInput): Promise<{ sessionId: string, personId: string }> {
  const [person] = await ctx.db.select().from(people).where(eq(sql`lower(${people.email})`, input.email.trim().toLowerCase()))
  const matches = await verifyPassword(person?.passwordHash ?? null, input.password)
  const locked = person?.lockedUntil && person.lockedUntil > ctx.now
  if (!person || !matches || person.disabledAt || locked) {
    if (person && !locked) await countFailure(ctx, person.id)
    throw new DomainError('people.sign-in-refused', 'That address and password do not open an account. After several wrong tries, wait 15 minutes or ask for a new password.')
  }

  const sessionId = newSecret()
  await ctx.db.transaction(async (tx) => {
    await tx.update(people).set({ failedTries: 0, lockedUntil: null }).where(eq(people.id, person.id))
    await tx.insert(sessions).values({ idHash: hashSecret(sessionId), personId: person.id, createdAt: ctx.now, lastSeenAt: ctx.now, expiresAt: new Date(ctx.now.getTime() + absoluteHours * 3_600_000), userAgent: input.userAgent.slice(0, 200) })
    await appendAudit(tx, { at: ctx.now, event: 'people.signed-in', personId: person.id, subjectKind: 'person', subjectId: person.id })
  })
  return { sessionId, personId: person.id }
}

async function countFailure(ctx: SystemContext, personId: string): Promise<void> {
  await ctx.db.transaction(async (tx) => {
    const [row] = await tx.update(people).set({ failedTries: sql`${people.failedTries} + 1` }).where(eq(people.id, personId)).returning({ failedTries: people.failedTries })
    if (row && row.failedTries >= triesBeforeLock) await tx.update(people).set({ failedTries: 0, lockedUntil: new Date(ctx.now.getTime() + lockMinutes * 60_000) }).where(eq(people.id, personId))
    await appendAudit(tx, { at: ctx.now, event: 'people.sign-in-refused', personId: null, subjectKind: 'person', subjectId: personId })
  })
}
