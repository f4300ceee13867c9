import { presentEscalationState } from '#server/presenters/escalation'
import { answerEscalation } from '#server/services/escalation/answer-escalation'
import { defineStaffApi, idParams } from '#server/utils/api'
import { closeEscalationBody } from '#shared/contracts/escalation'

export default defineStaffApi({ params: idParams, body: closeEscalationBody }, async ({ ctx, params, body }) =>
  presentEscalationState(await answerEscalation(ctx, { id: params.id, answer: 'close', words: body.words, rowVersion: body.rowVersion })))
