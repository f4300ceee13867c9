import { presentStanding } from '#server/presenters/pathway'
import { recordFirstCheck } from '#server/services/pathway/record-first-check'
import { defineStaffApi, idParams } from '#server/utils/api'
import { foundBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: foundBody }, async ({ ctx, params, body }) => presentStanding(await recordFirstCheck(ctx, { ...body, pathwayId: params.id })))
