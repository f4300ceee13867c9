import { and, asc, eq, isNull, or, sql } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { pathways, patients, sites } from '#server/db/schema/index'
import { maySeePathway } from '#server/policies/scope'
import type { Actor } from '#shared/domain/people/vocabulary'

export interface Alike {
  /** Only for a patient whom the caller may open. */
  id: string | null
  name: string
  birthDate: string
  recordNumber: string
  siteName: string
  sameIdentifier: boolean
}

/**
 * Patients of the same name and birth date, or with the same identifier. Unscoped on purpose: a second record of somebody who is
 * known at another site is the harm to prevent. Of a patient whom the caller may not open it tells only what they have just typed
 * themselves, the record number and the site to ring.
 */
export async function unscopedFindAlike(db: Queryable, actor: Actor, given: { name: string, birthDate: string, identifier: string | null }): Promise<Alike[]> {
  const name = given.name.toLowerCase().replace(/\s+/g, ' ')
  const rows = await db.select({ patient: patients, siteName: sites.name }).from(patients).innerJoin(sites, eq(sites.id, patients.siteId))
    .where(and(isNull(patients.mergedIntoId), or(and(eq(patients.birthDate, given.birthDate), sql`lower(regexp_replace(${patients.name}, '\\s+', ' ', 'g')) = ${name}`), given.identifier ? eq(patients.identifier, given.identifier) : undefined)))
    .orderBy(asc(patients.name), asc(patients.id)).limit(10)
  return Promise.all(rows.map(async ({ patient, siteName }) => {
    const own = await db.select({ siteId: pathways.siteId, practiceId: pathways.practiceId }).from(pathways).where(eq(pathways.patientId, patient.id))
    const isVisible = own.some(pathway => maySeePathway(actor, pathway))
    const sameIdentifier = given.identifier !== null && patient.identifier === given.identifier
    return { id: isVisible ? patient.id : null, name: isVisible ? patient.name : given.name, birthDate: isVisible ? patient.birthDate : given.birthDate, recordNumber: patient.recordNumber, siteName, sameIdentifier }
  }))
}
