import { presentVisit } from '#server/presenters/visit'
import { moveVisit } from '#server/services/visit/move-visit'
import { defineStaffApi, idParams } from '#server/utils/api'
import { moveVisitBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: moveVisitBody }, async ({ ctx, params, body }) => presentVisit(await moveVisit(ctx, { visitId: params.id, ...body })))
