import { asc, eq } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { savedFilters } from '#server/db/schema/index'

/** One person's named filters, by name. */
export function listSavedFilters(db: Queryable, personId: string) {
  return db.select({ id: savedFilters.id, name: savedFilters.name, query: savedFilters.query }).from(savedFilters).where(eq(savedFilters.personId, personId)).orderBy(asc(savedFilters.name), asc(savedFilters.id))
}
