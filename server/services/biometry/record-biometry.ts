import { and, desc, eq, ne } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { biometries, pathways } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import { biometryOf, measureColumns, measuresOf } from '#server/services/biometry/measures'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { RecordBiometryBody } from '#shared/contracts/biometry'
import { checkPlausibility } from '#shared/domain/biometry/plausibility'
import { DomainError } from '#shared/domain/errors'
import { otherEye } from '#shared/domain/pathway/vocabulary'
import { parseAcuity } from '#shared/domain/review/acuity'

/**
 * A new version of this eye's measurements, judged beside the other eye's. What nobody's eye has is refused with the slip named; what
 * is unusual is stored as a warning that keeps the biometry from being accepted until it is repeated or explained by name.
 */
export async function recordBiometry(ctx: ServiceContext, input: RecordBiometryBody & { pathwayId: string }) {
  try {
    const recorded = await ctx.db.transaction(async (tx) => {
      const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'measure', refusal: 'A nurse, optometrist or surgeon of this site records biometry.' })
      requireOpen(loaded.pathway)
      if (loaded.pathway.operatedAt) throw new DomainError('biometry.conflict', 'This eye is operated: its biometry is closed.')
      if (loaded.pathway.stage === 'referral') throw new DomainError('pathway.transition-not-allowed', 'Accept the referral and go on to biometry first.')
      return insertVersion(tx, ctx, loaded, input)
    })
    await notifyLive(ctx.db, 'pathway', recorded.siteId, [input.pathwayId])
    return recorded.biometry
  }
  catch (error) {
    if (refusedConstraint(error) === 'biometries_version') throw new DomainError('biometry.stale', 'This eye was measured again meanwhile. Look at the newest version.')
    throw error
  }
}

async function insertVersion(tx: Transaction, ctx: ServiceContext, loaded: LoadedPathway, input: RecordBiometryBody & { pathwayId: string }) {
  const { pathway } = loaded
  const [last] = await tx.select().from(biometries).where(eq(biometries.pathwayId, pathway.id)).orderBy(desc(biometries.version)).limit(1)
  if ((last?.version ?? 0) !== input.baseVersion) throw new DomainError('biometry.stale', 'This eye was measured again meanwhile. Look at the newest version.', { detail: { current: { version: last?.version ?? 0 } } })
  const fellow = input.fellow ?? await knownFellow(tx, ctx, loaded)
  const report = checkPlausibility(biometryOf(pathway.eye, input.eye), fellow && biometryOf(otherEye(pathway.eye), fellow))
  if (report.verdict === 'refuse') throw new DomainError('biometry.invalid', 'Some values cannot be this eye’s.', { fields: report.findings.flatMap(each => each.problems ?? []).map(each => ({ ...each, field: `eye.${each.field}` })) })
  const acuity = input.preoperativeAcuity ? parseAcuity(input.preoperativeAcuity) : undefined
  const [biometry] = await tx.insert(biometries).values({
    pathwayId: pathway.id, version: input.baseVersion + 1, source: input.source, ...measureColumns(input.eye), cctUm: input.cctUm, endothelialCellsPerMm2: input.endothelialCellsPerMm2,
    preoperativeLogMar: acuity?.logMar, preoperativeAcuityEntered: acuity?.entered, preoperativeIopMmHg: input.preoperativeIopMmHg,
    warnings: report.warnings.map(({ ruleId, sentence }) => ({ ruleId, sentence })), measuredBy: ctx.actor.personId, measuredAt: ctx.now,
  }).returning()
  if (!biometry) throw new DomainError('biometry.conflict', 'The measurements could not be stored.')
  // The fellow eye's values are kept with this sitting even when that eye has no pathway of its own.
  await recordEvent(tx, ctx, loaded, { kind: 'biometry-recorded', words: last ? 'Biometry repeated' : 'Biometry recorded', audit: 'biometry.recorded', payload: { version: biometry.version, warnings: biometry.warnings.map(each => each.ruleId) }, detail: { biometryId: biometry.id, ...(input.fellow ? { fellow: input.fellow } : {}) }, change: { biometryAt: pathway.biometryAt ?? ctx.now } })
  return { biometry, siteId: pathway.siteId }
}

/** The other eye's newest measurements, when it has been measured here. */
async function knownFellow(tx: Transaction, ctx: ServiceContext, { pathway }: LoadedPathway) {
  const [row] = await tx.select({ biometry: biometries }).from(biometries).innerJoin(pathways, eq(pathways.id, biometries.pathwayId))
    .where(and(eq(pathways.patientId, pathway.patientId), ne(pathways.eye, pathway.eye), pathwaysInScope(ctx.actor))).orderBy(desc(biometries.measuredAt)).limit(1)
  return row ? measuresOf(row.biometry) : undefined
}
