import { and, asc, eq, ilike, inArray, or, sql } from 'drizzle-orm'
import { pathways, patients } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { FindPatientsQuery } from '#shared/contracts/patient'

export const pageOfPatients = 20

/** Patients with a pathway that the caller may see, by a part of the name, record number, telephone or birth date. A keyset page at a time. */
export async function findPatients(ctx: ServiceContext, { find, afterName, afterId }: FindPatientsQuery) {
  const words = find.replace(/[\\%_]/g, found => `\\${found}`)
  const digits = find.replace(/\D/g, '').replace(/^(44|0)/, '')
  const visible = ctx.db.select({ id: pathways.patientId }).from(pathways).where(pathwaysInScope(ctx.actor))
  return ctx.db.select({ id: patients.id, name: patients.name, recordNumber: patients.recordNumber, birthDate: patients.birthDate }).from(patients)
    .where(and(
      inArray(patients.id, visible),
      or(ilike(patients.name, `%${words}%`), ilike(patients.recordNumber, `${words}%`), digits.length >= 6 ? ilike(patients.phone, `%${digits}`) : undefined, isDate(find) ? eq(patients.birthDate, find) : undefined),
      afterName !== undefined && afterId ? sql`(${patients.name}, ${patients.id}) > (${afterName}, ${afterId}::uuid)` : undefined,
    ))
    .orderBy(asc(patients.name), asc(patients.id)).limit(pageOfPatients)
}

/** A date that PostgreSQL will take: 31 February is no birth date, and asking for it must not fail. */
function isDate(text: string): boolean {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return false
  const date = new Date(`${text}T00:00:00Z`)
  return !Number.isNaN(date.getTime()) && date.toISOString().startsWith(text)
}
