import { presentSession } from '#server/presenters/booking'
import { closeSession } from '#server/services/visit/change-session'
import { defineStaffApi, idParams } from '#server/utils/api'
import { rowVersionBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: rowVersionBody }, async ({ ctx, params, body }) => presentSession(await closeSession(ctx, { sessionId: params.id, rowVersion: body.rowVersion })))
