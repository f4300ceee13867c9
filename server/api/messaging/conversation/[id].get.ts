import { presentConversation } from '#server/presenters/messaging'
import { getConversation } from '#server/services/messaging/get-conversation'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentConversation(await getConversation(ctx, params.id), ctx.actor, ctx.now))
