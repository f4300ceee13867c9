import { presentReplies } from '#server/presenters/messaging'
import { listReplies } from '#server/services/messaging/list-replies'
import { defineStaffApi } from '#server/utils/api'
import { repliesQuery } from '#shared/contracts/messaging'

export default defineStaffApi({ query: repliesQuery }, async ({ ctx, query }) => presentReplies(await listReplies(ctx, query), ctx.now))
