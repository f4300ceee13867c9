import { presentEscalationState } from '#server/presenters/escalation'
import { answerEscalation } from '#server/services/escalation/answer-escalation'
import { defineStaffApi, idParams } from '#server/utils/api'
import { takeOverBody } from '#shared/contracts/escalation'

export default defineStaffApi({ params: idParams, body: takeOverBody }, async ({ ctx, params, body }) =>
  presentEscalationState(await answerEscalation(ctx, { id: params.id, answer: 'take-over', words: 'Taken over.', rowVersion: body.rowVersion })))
