import { eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { theatreListChanges, theatreLists } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

type List = typeof theatreLists.$inferSelect
interface ListChange { kind: typeof theatreListChanges.$inferInsert['kind'], words: string, reason?: string | null, detail?: Record<string, unknown> }

/** Leaves the change on the list and raises its row version, on the locked row. What comes after the lock is marked as such. */
export async function recordListChange(tx: Transaction, ctx: ServiceContext, list: List, change: ListChange, set: Partial<typeof theatreLists.$inferInsert> = {}): Promise<List> {
  await tx.insert(theatreListChanges).values({ listId: list.id, at: ctx.now, personId: ctx.actor.personId, kind: change.kind, words: change.words, reason: change.reason || null, afterLock: list.lockedAt !== null, detail: change.detail ?? {} })
  const [changed] = await tx.update(theatreLists).set({ ...set, rowVersion: sql`${theatreLists.rowVersion} + 1` }).where(eq(theatreLists.id, list.id)).returning()
  return changed ?? list
}

/** The surgeon locked the list: whoever changes it now says why. */
export function requireReason(list: Pick<List, 'lockedAt'>, reason: string | undefined): void {
  if (!list.lockedAt || (reason ?? '').trim().length >= 3) return
  throw new DomainError('theatre.reason-needed', 'The surgeon has locked this list. Say why it changes.', { fields: [{ field: 'reason', code: 'required', message: 'Say why the locked list changes.' }] })
}
