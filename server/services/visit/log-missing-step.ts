import { missingSteps } from '#server/db/schema/index'
import { mayRunClinic } from '#server/policies/visit'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { loadVisit } from '#server/services/visit/load-visit'
import type { MissingStepBody } from '#shared/contracts/visit'
import { DomainError } from '#shared/domain/errors'
import { missingPatientReason } from '#shared/domain/escalation/rules'

/** Records a call or text to a missing patient. `not-found` ends the steps and raises visit.missing for a day-one check. */
export async function logMissingStep(ctx: ServiceContext, input: MissingStepBody & { visitId: string }) {
  const siteId = await ctx.db.transaction(async (tx) => {
    const { visit } = await loadVisit(tx, ctx.actor, input.visitId)
    if (!mayRunClinic(ctx.actor, visit.siteId)) throw new DomainError('visit.not-allowed', 'You may not run the clinic list at this site.')
    await tx.insert(missingSteps).values({ visitId: visit.id, step: input.step, outcome: input.outcome, at: ctx.now, personId: ctx.actor.personId })
    await appendAudit(tx, { at: ctx.now, event: 'visit.step-logged', personId: ctx.actor.personId, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId, payload: { step: input.step } })
    if (input.step === 'not-found' && visit.kind === 'day-one') {
      await raiseEscalation(tx, {
        pathwayId: visit.pathwayId, raisedBy: ctx.actor.personId, now: ctx.now,
        reasons: [missingPatientReason(visit.id)],
      })
    }
    return visit.siteId
  })
  await notifyLive(ctx.db, 'visit', siteId, [input.visitId])
  return { logged: true }
}
