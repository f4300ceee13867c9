import { presentStanding } from '#server/presenters/pathway'
import { decideFirstCheck } from '#server/services/pathway/decide-first-check'
import { defineStaffApi, idParams } from '#server/utils/api'
import { decisionBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: decisionBody }, async ({ ctx, params, body }) => presentStanding(await decideFirstCheck(ctx, { ...body, pathwayId: params.id })))
