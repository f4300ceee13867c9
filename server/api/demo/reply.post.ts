import { replyAsPatient } from '#server/services/messaging/demo'
import { definePublicApi } from '#server/utils/api'
import { demoReplyBody } from '#shared/contracts/messaging'

// Public: the demo holds invented people only; outside the demo it is not found.
export default definePublicApi({ body: demoReplyBody }, async ({ body }) => {
  await replyAsPatient(body)
  return { sent: true }
})
