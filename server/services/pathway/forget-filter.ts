import { and, eq } from 'drizzle-orm'
import { savedFilters } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { listSavedFilters } from '#server/services/pathway/list-saved-filters'
import { DomainError } from '#shared/domain/errors'

/** Removes one of the caller's own filters; anybody else's is not there. */
export async function forgetFilter(ctx: ServiceContext, filterId: string) {
  const { personId } = ctx.actor
  const gone = await ctx.db.delete(savedFilters).where(and(eq(savedFilters.id, filterId), eq(savedFilters.personId, personId))).returning({ id: savedFilters.id })
  if (!gone.length) throw new DomainError('pathway.not-found', 'There is no such saved filter.')
  return listSavedFilters(ctx.db, personId)
}
