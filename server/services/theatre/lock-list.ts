import { and, eq, inArray } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { theatreLists } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import { DomainError } from '#shared/domain/errors'
import type { Actor } from '#shared/domain/people/vocabulary'

/**
 * One list of a site where the caller works, locked. Always before any pathway of it: two changes of one list then wait for each
 * other, and never one for the other's pathway while holding the list.
 */
export async function lockList(tx: Transaction, actor: Actor, listId: string) {
  const { siteIds } = pathwayScope(actor)
  const [list] = siteIds.length ? await tx.select().from(theatreLists).where(and(eq(theatreLists.id, listId), inArray(theatreLists.siteId, siteIds))).for('update') : []
  if (!list) throw new DomainError('theatre.not-found', 'There is no such list.')
  return list
}
