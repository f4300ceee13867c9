import { closePlace } from '#server/services/visit/change-session'
import { defineStaffApi, idParams } from '#server/utils/api'
import { noBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: noBody }, async ({ ctx, params }) => ({ id: (await closePlace(ctx, { placeId: params.id })).id }))
