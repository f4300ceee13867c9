import { eq, sql } from 'drizzle-orm'
import { people, savedFilters } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { listSavedFilters } from '#server/services/pathway/list-saved-filters'
import type { SavedFilterBody } from '#shared/contracts/pathway'
import { DomainError } from '#shared/domain/errors'

/** More would no longer be found at a glance. */
export const mostFilters = 20

/** Keeps a filter under a name for its person alone; the name given again takes the earlier one's place. */
export async function saveFilter(ctx: ServiceContext, { name, query }: SavedFilterBody) {
  const { personId } = ctx.actor
  return ctx.db.transaction(async (tx) => {
    // The person's row is held so that two windows cannot count at once and both pass the limit.
    await tx.select({ id: people.id }).from(people).where(eq(people.id, personId)).for('update')
    const kept = await listSavedFilters(tx, personId)
    if (kept.length >= mostFilters && !kept.some(each => each.name === name)) throw new DomainError('pathway.invalid', `You keep ${mostFilters} filters already.`, { fields: [{ field: 'name', code: 'out-of-range', message: 'Remove a saved filter first.' }] })
    await tx.insert(savedFilters).values({ personId, name, query }).onConflictDoUpdate({ target: [savedFilters.personId, savedFilters.name], set: { query: sql`excluded.query` } })
    return listSavedFilters(tx, personId)
  })
}
