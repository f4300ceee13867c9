import { eq } from 'drizzle-orm'
import { sites } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

/** The asked-for site if the caller works there, else their first site. */
export async function resolveSite(ctx: ServiceContext, siteId: string | undefined) {
  const { siteIds } = pathwayScope(ctx.actor)
  const wanted = siteId ?? siteIds[0]
  if (!wanted || !siteIds.includes(wanted)) throw new DomainError('visit.site-not-found', 'You do not work at such a site.')
  const [site] = await ctx.db.select().from(sites).where(eq(sites.id, wanted))
  if (!site) throw new DomainError('visit.site-not-found', 'There is no such site.')
  return site
}
