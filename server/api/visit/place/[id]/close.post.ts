import { closePlace } from '#server/services/visit/change-session'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => ({ id: (await closePlace(ctx, { placeId: params.id })).id }))
