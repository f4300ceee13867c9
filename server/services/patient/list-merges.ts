import { and, desc, eq, isNull } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import { pathways, patientMerges, patients, people } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { maySeePathway } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

const merged = alias(patients, 'merged')

/** The records that were merged into this one and may still be taken back, newest first. */
export async function listMerges(ctx: ServiceContext, patientId: string) {
  const [where, rows] = await Promise.all([
    ctx.db.select({ siteId: pathways.siteId, practiceId: pathways.practiceId }).from(pathways).where(eq(pathways.patientId, patientId)),
    ctx.db.select({ merge: patientMerges, recordNumber: merged.recordNumber, name: merged.name, personName: people.name }).from(patientMerges)
      .innerJoin(merged, eq(merged.id, patientMerges.mergedId)).innerJoin(people, eq(people.id, patientMerges.signedBy))
      .where(and(eq(patientMerges.keptId, patientId), isNull(patientMerges.undoneAt))).orderBy(desc(patientMerges.signedAt)),
  ])
  if (!where.some(each => maySeePathway(ctx.actor, each))) throw new DomainError('patient.not-found', 'There is no such patient.')
  return { rows, canUndo: where.every(each => maySeePathway(ctx.actor, each) && may(ctx.actor, 'mergePatients', each.siteId)) }
}
