import { presentStanding } from '#server/presenters/pathway'
import { decideFellowEye } from '#server/services/pathway/decide-fellow-eye'
import { defineStaffApi, idParams } from '#server/utils/api'
import { decisionBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: decisionBody }, async ({ ctx, params, body }) => presentStanding(await decideFellowEye(ctx, { ...body, pathwayId: params.id })))
