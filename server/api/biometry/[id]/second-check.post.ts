import { presentLensCheck } from '#server/presenters/biometry'
import { checkLens } from '#server/services/biometry/check-lens'
import { defineStaffApi, idParams } from '#server/utils/api'
import { checkLensBody } from '#shared/contracts/biometry'

export default defineStaffApi({ params: idParams, body: checkLensBody }, async ({ ctx, params, body }) => presentLensCheck(await checkLens(ctx, { ...body, pathwayId: params.id })))
