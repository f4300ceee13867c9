import { presentEscalationState } from '#server/presenters/escalation'
import { answerEscalation } from '#server/services/escalation/answer-escalation'
import { defineStaffApi, idParams } from '#server/utils/api'
import { acknowledgeBody } from '#shared/contracts/escalation'

export default defineStaffApi({ params: idParams, body: acknowledgeBody }, async ({ ctx, params, body }) =>
  presentEscalationState(await answerEscalation(ctx, { id: params.id, answer: 'acknowledge', words: body.plan, rowVersion: body.rowVersion })))
