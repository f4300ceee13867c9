import { and, eq, isNull, ne } from 'drizzle-orm'
import { pathways, patients } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { loadPathway } from '#server/services/pathway/load-pathway'

const parts = (name: string) => name.toLowerCase().split(/[^\p{L}]+/u).filter(part => part.length > 2)

/** Patients whom the caller may open and who may be the person of this referral: born the same day, with a part of the name or the telephone in common. */
export async function findAlikeOf(ctx: ServiceContext, pathwayId: string) {
  const { patient } = await loadPathway(ctx.db, ctx.actor, pathwayId)
  const rows = await ctx.db.select({ patient: patients, eye: pathways.eye, operatedAt: pathways.operatedAt, stage: pathways.stage }).from(patients).innerJoin(pathways, eq(pathways.patientId, patients.id))
    .where(and(eq(patients.birthDate, patient.birthDate), ne(patients.id, patient.id), isNull(patients.mergedIntoId), pathwaysInScope(ctx.actor))).orderBy(patients.recordNumber).limit(50)
  const alike = new Map<string, { patient: typeof patient, why: string[], eyes: { eye: 'right' | 'left', operatedAt: Date | null, stage: string }[] }>()
  for (const row of rows) {
    const why = [...row.patient.phone && row.patient.phone === patient.phone ? ['same telephone'] : [], ...parts(row.patient.name).some(part => parts(patient.name).includes(part)) ? ['a name alike'] : []]
    if (!why.length) continue
    const found = alike.get(row.patient.id) ?? { patient: row.patient, why: ['same birth date', ...why], eyes: [] }
    found.eyes.push({ eye: row.eye, operatedAt: row.operatedAt, stage: row.stage })
    alike.set(row.patient.id, found)
  }
  return { patient, alike: [...alike.values()] }
}
export type AlikeOf = Awaited<ReturnType<typeof findAlikeOf>>
