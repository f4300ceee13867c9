import { desc, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { lensPlans } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import { judgeLens } from '#server/services/biometry/check-lens'
import { lockCurrentBiometry } from '#server/services/biometry/lock-current'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import type { SignLensPlanBody } from '#shared/contracts/biometry'
import { DomainError } from '#shared/domain/errors'

/** Signs the surgeon's own choice of lens with its second check. A difference, or a check that could not be made, must be explained. */
export async function signLensPlan(ctx: ServiceContext, input: SignLensPlanBody & { pathwayId: string }) {
  try {
    const done = await ctx.db.transaction(tx => write(tx, ctx, input))
    await notifyLive(ctx.db, 'pathway', done.siteId, [input.pathwayId])
    return done.plan
  }
  catch (error) {
    if (refusedConstraint(error) === 'lens_plans_version') throw new DomainError('biometry.stale', 'Somebody signed a plan meanwhile. Look at it first.')
    throw error
  }
}

async function write(tx: Transaction, ctx: ServiceContext, input: SignLensPlanBody & { pathwayId: string }) {
  const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'signLensPlan', refusal: 'A surgeon of this site signs the lens plan.' })
  requireOpen(loaded.pathway)
  if (loaded.pathway.operatedAt) throw new DomainError('biometry.conflict', 'This eye is operated. What was implanted stands in the operation note.')
  const biometry = await lockCurrentBiometry(tx, input.pathwayId, input.biometryId)
  if (!biometry.acceptedAt) throw new DomainError('biometry.requirements-unmet', 'Accept the biometry first.')
  const [last] = await tx.select().from(lensPlans).where(eq(lensPlans.pathwayId, input.pathwayId)).orderBy(desc(lensPlans.version)).limit(1)
  if ((last?.version ?? 0) !== input.baseVersion) throw new DomainError('biometry.stale', 'Somebody signed a plan meanwhile. Look at it first.', { detail: { current: last ? { version: last.version, model: last.model, powerD: last.powerD, targetD: last.targetD } : null } })
  if (last && input.amendReason.length < 3) throw new DomainError('biometry.incomplete', 'Say why the plan changes.', { fields: [{ field: 'amendReason', code: 'required', message: 'Say why the plan changes.' }] })
  const judged = judgeLens(loaded, biometry, input)
  if (judged.verdict !== 'agrees' && input.differenceExplained.length < 3) {
    throw new DomainError('biometry.explanation-needed', judged.reasons.join(' '), { fields: [{ field: 'differenceExplained', code: 'required', message: 'Explain why this lens is right all the same.' }], detail: { verdict: judged.verdict, reasons: judged.reasons } })
  }
  const version = input.baseVersion + 1
  const [plan] = await tx.insert(lensPlans).values({
    pathwayId: input.pathwayId, version, biometryId: biometry.id, model: input.model, powerD: input.powerD, targetD: input.targetD, predictedD: input.predictedD,
    secondCheck: { limitD: judged.limitD, reasons: judged.reasons, aConstant: input.aConstant, result: judged.check }, secondCheckAgrees: judged.verdict, differenceExplained: input.differenceExplained || null,
    signedBy: ctx.actor.personId, signedAt: ctx.now, amendReason: last ? input.amendReason : null,
  }).returning()
  if (!plan) throw new DomainError('biometry.conflict', 'The plan could not be signed.')
  await recordEvent(tx, ctx, loaded, { kind: last ? 'lens-plan-amended' : 'lens-plan-signed', words: last ? `Lens plan amended: ${input.amendReason}` : 'Lens plan signed', audit: last ? 'biometry.lens-plan-amended' : 'biometry.lens-plan-signed', payload: { version, secondCheck: judged.verdict } })
  return { plan, siteId: loaded.pathway.siteId }
}
