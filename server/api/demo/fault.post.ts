import { setDemoFault } from '#server/services/messaging/demo'
import { definePublicApi } from '#server/utils/api'
import { demoModeBody } from '#shared/contracts/messaging'

// Public: the demo holds invented people only; outside the demo it is not found.
export default definePublicApi({ body: demoModeBody }, async ({ body }) => {
  await setDemoFault(body)
  return { set: true }
})
