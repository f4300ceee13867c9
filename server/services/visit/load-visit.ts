import { and, eq } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { pathways, patients, sites, visits } from '#server/db/schema/index'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { DomainError } from '#shared/domain/errors'
import type { Actor } from '#shared/domain/people/vocabulary'

/** One visit with its pathway, patient and site, if the caller may see the pathway; else not found. */
export async function loadVisit(db: Queryable, actor: Actor, visitId: string) {
  const [row] = await db.select({ visit: visits, pathway: pathways, patient: patients, site: sites })
    .from(visits)
    .innerJoin(pathways, eq(pathways.id, visits.pathwayId))
    .innerJoin(patients, eq(patients.id, visits.patientId))
    .innerJoin(sites, eq(sites.id, visits.siteId))
    .where(and(eq(visits.id, visitId), pathwaysInScope(actor)))
  if (!row) throw new DomainError('visit.not-found', 'There is no such visit.')
  return row
}
export type LoadedVisit = Awaited<ReturnType<typeof loadVisit>>
