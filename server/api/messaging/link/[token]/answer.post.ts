import { answerVisit } from '#server/services/messaging/answer-visit'
import { definePublicApi } from '#server/utils/api'
import { readLinkId } from '#server/utils/link-session'
import { answerVisitBody, linkParams } from '#shared/contracts/messaging'

// Public: the sealed cookie of this link stands for the patient.
export default definePublicApi({ params: linkParams, body: answerVisitBody }, async ({ ctx, params, body, event }) => {
  await answerVisit(ctx, { token: params.token, linkId: await readLinkId(event), ...body })
  return { answered: body.answer }
})
