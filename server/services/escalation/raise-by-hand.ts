import { and, eq } from 'drizzle-orm'
import { pathways } from '#server/db/schema/index'
import { mayRaise } from '#server/policies/escalation'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { DomainError } from '#shared/domain/errors'
import { handRaisedReason } from '#shared/domain/escalation/rules'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

/** A clinician asks for a surgeon: rule hand.raised, with the clinician's own words as its sentence. */
export async function raiseByHand(ctx: ServiceContext, input: { pathwayId: string, urgency: Urgency, words: string }) {
  const raised = await ctx.db.transaction(async (tx) => {
    const [pathway] = await tx.select().from(pathways).where(and(eq(pathways.id, input.pathwayId), pathwaysInScope(ctx.actor)))
    if (!pathway) throw new DomainError('pathway.not-found', 'There is no such pathway.')
    if (!mayRaise(ctx.actor, pathway)) throw new DomainError('escalation.not-allowed', 'You may not raise an escalation here.')
    return raiseEscalation(tx, { pathwayId: pathway.id, raisedBy: ctx.actor.personId, now: ctx.now, reasons: [handRaisedReason(input.urgency, input.words)] })
  })
  await notifyLive(ctx.db, 'escalation', raised.siteId, [raised.id])
  return raised
}
