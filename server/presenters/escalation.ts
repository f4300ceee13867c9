import { mayAnswer } from '#server/policies/escalation'
import type { listEscalations } from '#server/services/escalation/list-escalations'
import type { escalations } from '#server/db/schema/index'
import { lastRung } from '#shared/domain/escalation/ladder'
import type { Actor } from '#shared/domain/people/vocabulary'

const rungs = Array.from({ length: lastRung }, (_, index) => index + 1)
type Row = Awaited<ReturnType<typeof listEscalations>>[number]

export function presentEscalationState(row: typeof escalations.$inferSelect) {
  return { id: row.id, state: row.state, urgency: row.urgency, rowVersion: row.rowVersion, plan: row.plan, closingWords: row.closingWords }
}

export function presentEscalation(row: Row, actor: Actor) {
  const { escalation } = row
  const may = mayAnswer(actor, escalation)
  return {
    ...presentEscalationState(escalation),
    number: escalation.number,
    pathwayId: escalation.pathwayId,
    eye: row.eye,
    operatedAt: row.operatedAt?.toISOString() ?? null,
    patient: row.patient,
    site: row.site,
    reasons: escalation.reasons.map(reason => ({ ruleId: reason.ruleId, ruleVersion: reason.ruleVersion, urgency: reason.urgency, sentence: reason.sentence, source: reason.source })),
    raisedAt: escalation.raisedAt.toISOString(),
    answerBy: escalation.answerBy.toISOString(),
    toldName: row.toldName,
    raisedBy: row.raiserName,
    closedBy: row.closerName,
    isMine: [escalation.surgeonId, escalation.acknowledgedBy, row.surgeonId].includes(actor.personId),
    alertedAt: row.alertedAt?.toISOString() ?? null,
    reviewVisitId: row.reviewVisitId,
    ladder: rungs.map(rung => ({ rung, name: row.rota.find(shift => shift.rung === rung)?.name ?? null })),
    rung: escalation.rung,
    nextRungAt: escalation.nextRungAt?.toISOString() ?? null,
    acknowledgedAt: escalation.acknowledgedAt?.toISOString() ?? null,
    acknowledgedBy: row.acknowledgerName,
    closedAt: escalation.closedAt?.toISOString() ?? null,
    actions: row.actions.map(action => ({ at: action.at.toISOString(), kind: action.kind, words: action.words, personName: action.personName })),
    abilities: {
      canAcknowledge: may && escalation.state === 'open',
      canTakeOver: may && escalation.state === 'acknowledged' && escalation.acknowledgedBy !== actor.personId,
      canRecord: may && escalation.state !== 'closed',
      canClose: may && escalation.state === 'acknowledged',
    },
  }
}
export type EscalationItem = ReturnType<typeof presentEscalation>
