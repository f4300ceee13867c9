import { presentGoingOut } from '#server/presenters/messaging'
import { listGoingOut } from '#server/services/messaging/list-going-out'
import { defineStaffApi } from '#server/utils/api'
import { goingOutQuery } from '#shared/contracts/messaging'

export default defineStaffApi({ query: goingOutQuery }, async ({ ctx, query }) => presentGoingOut(await listGoingOut(ctx, query), ctx.now))
