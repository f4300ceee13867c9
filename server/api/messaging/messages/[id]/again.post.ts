import { sendAgain } from '#server/services/messaging/send-again'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => {
  await sendAgain(ctx, { id: params.id })
  return { queued: true }
})
