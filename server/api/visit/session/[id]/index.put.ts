import { presentSession } from '#server/presenters/booking'
import { changeSession } from '#server/services/visit/change-session'
import { defineStaffApi, idParams } from '#server/utils/api'
import { changeSessionBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: changeSessionBody }, async ({ ctx, params, body }) => presentSession(await changeSession(ctx, { sessionId: params.id, ...body })))
