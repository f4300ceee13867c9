import { presentDemo } from '#server/presenters/demo'
import { unscopedReadDemo } from '#server/services/messaging/demo'
import { definePublicApi } from '#server/utils/api'

// Public: the demo holds invented people only; outside the demo it is not found.
export default definePublicApi({}, async ({ ctx }) => presentDemo(await unscopedReadDemo(ctx)))
