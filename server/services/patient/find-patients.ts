import { and, asc, eq, ilike, inArray, or } from 'drizzle-orm'
import { pathways, patients } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'

/** Patients with a pathway that the caller may see, by a part of the name, record number, telephone or birth date. */
export async function findPatients(ctx: ServiceContext, find: string) {
  const words = find.replace(/[\\%_]/g, found => `\\${found}`)
  const digits = find.replace(/\D/g, '').replace(/^0/, '')
  const visible = ctx.db.select({ id: pathways.patientId }).from(pathways).where(pathwaysInScope(ctx.actor))
  return ctx.db.select({ id: patients.id, name: patients.name, recordNumber: patients.recordNumber, birthDate: patients.birthDate }).from(patients)
    .where(and(inArray(patients.id, visible), or(ilike(patients.name, `%${words}%`), ilike(patients.recordNumber, `${words}%`), digits.length >= 6 ? ilike(patients.phone, `%${digits}`) : undefined, /^\d{4}-\d{2}-\d{2}$/.test(find) ? eq(patients.birthDate, find) : undefined)))
    .orderBy(asc(patients.name), asc(patients.id)).limit(8)
}
