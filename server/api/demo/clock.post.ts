import { moveDemoClock } from '#server/services/messaging/demo'
import { definePublicApi } from '#server/utils/api'
import { demoClockBody } from '#shared/contracts/messaging'

// Public: the demo holds invented people only; outside the demo it is not found.
export default definePublicApi({ body: demoClockBody }, async ({ ctx, body }) => moveDemoClock(ctx, body))
