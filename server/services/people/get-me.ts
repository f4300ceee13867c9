import { and, count, eq, inArray } from 'drizzle-orm'
import { escalations, people, practices, sites } from '#server/db/schema/index'
import { sitesWithRole } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'

/** The signed-in person as the page frame needs them: names of places and how many escalations wait. */
export async function getMe(ctx: ServiceContext) {
  const clinicalSites = sitesWithRole(ctx.actor, 'nurse', 'optometrist', 'surgeon', 'clinical-lead', 'coordinator')
  const [[person], allSites, allPractices, [open]] = await Promise.all([
    ctx.db.select({ title: people.title, singleKeysOff: people.singleKeysOff }).from(people).where(eq(people.id, ctx.actor.personId)),
    ctx.db.select({ id: sites.id, name: sites.name, code: sites.code, zone: sites.zone, phone: sites.phone }).from(sites),
    ctx.db.select({ id: practices.id, name: practices.name }).from(practices),
    clinicalSites.length
      ? ctx.db.select({ n: count() }).from(escalations).where(and(inArray(escalations.siteId, clinicalSites), eq(escalations.state, 'open')))
      : Promise.resolve([{ n: 0 }]),
  ])
  return { actor: ctx.actor, title: person?.title ?? '', singleKeysOff: person?.singleKeysOff ?? false, sites: allSites, practices: allPractices, openEscalations: open?.n ?? 0 }
}
