import { writeByHand } from '#server/services/messaging/write-by-hand'
import { defineStaffApi, idParams } from '#server/utils/api'
import { writeBody } from '#shared/contracts/messaging'

export default defineStaffApi({ params: idParams, body: writeBody }, async ({ ctx, params, body }) => writeByHand(ctx, { patientId: params.id, ...body }))
