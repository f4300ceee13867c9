import { presentVisit } from '#server/presenters/visit'
import { cancelVisit } from '#server/services/visit/cancel-visit'
import { defineStaffApi, idParams } from '#server/utils/api'
import { cancelVisitBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: cancelVisitBody }, async ({ ctx, params, body }) => presentVisit(await cancelVisit(ctx, { visitId: params.id, ...body })))
