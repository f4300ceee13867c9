import { presentSafetyCheck } from '#server/presenters/safety-check'
import { getSafetyCheck } from '#server/services/theatre/get-safety-check'
import { scanLens } from '#server/services/theatre/scan-lens'
import { defineStaffApi, idParams } from '#server/utils/api'
import { lensScanBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: lensScanBody }, async ({ ctx, params, body }) => {
  await scanLens(ctx, { ...body, caseId: params.id })
  return presentSafetyCheck(await getSafetyCheck(ctx, params.id), ctx.actor, ctx.now)
})
