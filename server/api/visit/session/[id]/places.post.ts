import { presentSession } from '#server/presenters/booking'
import { addPlaces } from '#server/services/visit/change-session'
import { defineStaffApi, idParams } from '#server/utils/api'
import { addPlacesBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: addPlacesBody }, async ({ ctx, params, body }) => presentSession(await addPlaces(ctx, { sessionId: params.id, ...body })))
