import { presentShared } from '#server/presenters/booking'
import { listSharedVisits } from '#server/services/visit/list-shared-visits'
import { defineStaffApi } from '#server/utils/api'

export default defineStaffApi({}, async ({ ctx }) => presentShared(await listSharedVisits(ctx), ctx.actor))
