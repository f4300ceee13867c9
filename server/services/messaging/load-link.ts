import { and, asc, desc, eq, gte, inArray, ne, or } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { pathways, patientLinks, patients, sites, symptomChecks, visits } from '#server/db/schema/index'
import { hashSecret } from '#server/services/people/tokens'
import { DomainError } from '#shared/domain/errors'

const mostChecks = 20
const live = ['booked', 'arrived', 'with-optometrist', 'missing'] as const

/** Who holds this link is one patient: everything read here is of that patient, and of the link's own pathway. */
export async function unscopedLoadLink(db: Queryable, input: { token: string, linkId: string | undefined, now: Date }) {
  if (!input.linkId) return undefined
  const [row] = await db.select({ link: patientLinks, patient: patients, pathway: pathways }).from(patientLinks)
    .innerJoin(patients, eq(patients.id, patientLinks.patientId)).innerJoin(pathways, eq(pathways.id, patientLinks.pathwayId))
    .where(and(eq(patientLinks.tokenHash, hashSecret(input.token)), eq(patientLinks.id, input.linkId)))
  if (!row || row.link.closedAt || row.link.expiresAt <= input.now) return undefined
  const since = new Date(input.now.getTime() - 12 * 3_600_000)
  const [visit] = await db.select().from(visits)
    .where(and(eq(visits.pathwayId, row.pathway.id), inArray(visits.state, live), or(gte(visits.startsAt, since), eq(visits.state, 'missing')))).orderBy(asc(visits.startsAt)).limit(1)
  const [site] = await db.select().from(sites).where(eq(sites.id, visit?.siteId ?? row.pathway.siteId))
  const told = await db.select().from(symptomChecks).where(and(eq(symptomChecks.pathwayId, row.pathway.id), gte(symptomChecks.at, since))).orderBy(desc(symptomChecks.at)).limit(mostChecks)
  const [later] = await db.select({ startsAt: visits.startsAt }).from(visits).where(and(eq(visits.pathwayId, row.pathway.id), eq(visits.state, 'booked'), gte(visits.startsAt, visit?.startsAt ?? input.now), visit ? ne(visits.id, visit.id) : undefined)).orderBy(asc(visits.startsAt)).limit(1)
  return site ? { ...row, visit, site, told, later } : undefined
}

export type LoadedLink = NonNullable<Awaited<ReturnType<typeof unscopedLoadLink>>>

export async function requireLink(db: Queryable, input: { token: string, linkId: string | undefined, now: Date }): Promise<LoadedLink> {
  const loaded = await unscopedLoadLink(db, input)
  if (!loaded) throw new DomainError('messaging.expired', 'This page was open for a while. Enter your date of birth again.')
  return loaded
}
