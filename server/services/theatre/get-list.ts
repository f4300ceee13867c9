import { eq } from 'drizzle-orm'
import { sites, theatreLists } from '#server/db/schema/index'
import { mayPrintList } from '#server/policies/theatre'
import { pathwayScope } from '#server/policies/scope'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { loadLists } from '#server/services/theatre/get-theatre-day'
import { DomainError } from '#shared/domain/errors'

/** One list to be printed, for the people of that theatre. Paper leaves the room, so taking it out is in the log. */
export async function getList(ctx: ServiceContext, listId: string) {
  const [[found], [place]] = await Promise.all([loadLists(ctx, eq(theatreLists.id, listId)), ctx.db.select({ site: sites }).from(sites).innerJoin(theatreLists, eq(theatreLists.siteId, sites.id)).where(eq(theatreLists.id, listId))])
  if (!found || !place || !pathwayScope(ctx.actor).siteIds.includes(found.list.siteId) || !mayPrintList(ctx.actor, found.list.siteId)) throw new DomainError('theatre.not-found', 'There is no such list.')
  await appendAudit(ctx.db, { at: ctx.now, event: 'theatre.list-printed', personId: ctx.actor.personId, subjectKind: 'list', subjectId: listId, siteId: found.list.siteId })
  return { found, site: place.site }
}
