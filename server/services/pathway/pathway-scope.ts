import { inArray, or, sql } from 'drizzle-orm'
import type { SQL } from 'drizzle-orm'
import { pathways } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

/** The condition that limits a query over pathways to what the caller may read. Deny by default. */
export function pathwaysInScope(actor: Actor): SQL {
  const { siteIds, practiceIds } = pathwayScope(actor)
  const parts: SQL[] = []
  if (siteIds.length) parts.push(inArray(pathways.siteId, siteIds))
  if (practiceIds.length) parts.push(inArray(pathways.practiceId, practiceIds))
  return or(...parts) ?? sql`false`
}
