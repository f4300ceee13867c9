import { handleReply } from '#server/services/messaging/handle-reply'
import { defineStaffApi, idParams } from '#server/utils/api'
import { handleReplyBody } from '#shared/contracts/messaging'

export default defineStaffApi({ params: idParams, body: handleReplyBody }, async ({ ctx, params, body }) => {
  await handleReply(ctx, { id: params.id, words: body.words })
  return { handled: true }
})
