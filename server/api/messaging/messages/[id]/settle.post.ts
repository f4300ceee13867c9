import { settleMessage } from '#server/services/messaging/handle-reply'
import { defineStaffApi, idParams } from '#server/utils/api'
import { settleBody } from '#shared/contracts/messaging'

export default defineStaffApi({ params: idParams, body: settleBody }, async ({ ctx, params, body }) => {
  await settleMessage(ctx, { id: params.id, words: body.words })
  return { settled: true }
})
