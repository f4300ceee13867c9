import { presentEscalationState } from '#server/presenters/escalation'
import { answerEscalation } from '#server/services/escalation/answer-escalation'
import { defineStaffApi, idParams } from '#server/utils/api'
import { recordBody } from '#shared/contracts/escalation'

export default defineStaffApi({ params: idParams, body: recordBody }, async ({ ctx, params, body }) =>
  presentEscalationState(await answerEscalation(ctx, { id: params.id, answer: 'record', words: body.words, rowVersion: body.rowVersion })))
