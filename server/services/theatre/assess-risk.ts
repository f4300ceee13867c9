import { desc, eq } from 'drizzle-orm'
import { refusedConstraint } from '#server/db/refused-constraint'
import { biometries, riskAssessments } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { repredictCase } from '#server/services/theatre/repredict-case'
import type { RiskBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'
import { assessRisk as workOut } from '#shared/domain/theatre/risk'
import type { RiskFactors } from '#shared/domain/theatre/vocabulary'

/** Works out the risk of one eye and keeps it as a version. Length, depth and cell count come from its biometry, age from the birth date. */
export async function assessRisk(ctx: ServiceContext, input: RiskBody & { pathwayId: string }) {
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'assessRisk', refusal: 'A surgeon of this site assesses risk.' })
      requireOpen(loaded.pathway)
      if (loaded.pathway.operatedAt) throw new DomainError('theatre.conflict', 'This eye is operated already.')
      const [[last], [biometry]] = await Promise.all([
        tx.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, input.pathwayId)).orderBy(desc(riskAssessments.version)).limit(1),
        tx.select().from(biometries).where(eq(biometries.pathwayId, input.pathwayId)).orderBy(desc(biometries.version)).limit(1),
      ])
      if ((last?.version ?? 0) !== input.baseVersion) throw new DomainError('theatre.stale', 'Somebody assessed this eye meanwhile. Look at it first.', { detail: { current: { version: last?.version ?? 0 } } })
      const factors: RiskFactors = {
        ...(loaded.patient.riskReasons.includes('glaucoma') ? { glaucoma: true } : {}), ...input.factors,
        ageYears: wholeYears(loaded.patient.birthDate, loaded.pathway.surgeryAt ?? ctx.now),
        axialLengthMm: biometry?.axialLengthMm, anteriorChamberDepthMm: biometry?.anteriorChamberDepthMm ?? undefined, endothelialCellsPerMm2: biometry?.endothelialCellsPerMm2 ?? undefined,
      }
      const result = workOut(factors)
      const [risk] = await tx.insert(riskAssessments).values({ pathwayId: input.pathwayId, version: input.baseVersion + 1, factors: { ...factors }, result: { ...result }, assessedBy: ctx.actor.personId, assessedAt: ctx.now }).returning()
      if (!risk) throw new DomainError('theatre.conflict', 'The risk could not be stored.')
      await recordEvent(tx, ctx, loaded, { kind: 'risk-assessed', words: 'Risk assessed', audit: 'theatre.risk-assessed', payload: { version: risk.version } })
      return { risk, siteId: loaded.pathway.siteId }
    })
    await repredictCase(ctx, input.pathwayId)
    await notifyLive(ctx.db, 'pathway', done.siteId, [input.pathwayId])
    return done.risk
  }
  catch (error) {
    if (refusedConstraint(error) === 'risk_assessments_version') throw new DomainError('theatre.stale', 'Somebody assessed this eye meanwhile. Look at it first.')
    throw error
  }
}

/** Whole years from a birth date to a day. */
function wholeYears(birthDate: string, at: Date): number {
  const [year = 0, month = 1, day = 1] = birthDate.split('-').map(Number)
  const before = at.getUTCMonth() + 1 < month || (at.getUTCMonth() + 1 === month && at.getUTCDate() < day)
  return at.getUTCFullYear() - year - (before ? 1 : 0)
}
