import { and, asc, eq, inArray } from 'drizzle-orm'
import { people, practices, roles, sites } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'

/** What forms about pathways let a person choose: the sites where they work, the surgeons there, and the practices to share with. */
export async function listChoices(ctx: ServiceContext) {
  const { siteIds } = pathwayScope(ctx.actor)
  if (!siteIds.length) return { sites: [], surgeons: [], practices: [] }
  const [siteRows, surgeonRows, practiceRows] = await Promise.all([
    ctx.db.select({ id: sites.id, name: sites.name, zone: sites.zone }).from(sites).where(inArray(sites.id, siteIds)).orderBy(asc(sites.name)),
    ctx.db.selectDistinct({ id: people.id, name: people.name }).from(people).innerJoin(roles, eq(roles.personId, people.id))
      .where(and(inArray(roles.siteId, siteIds), inArray(roles.role, ['surgeon', 'clinical-lead']))).orderBy(asc(people.name)),
    ctx.db.select({ id: practices.id, name: practices.name }).from(practices).orderBy(asc(practices.name)),
  ])
  return { sites: siteRows, surgeons: surgeonRows, practices: practiceRows }
}
