import { presentSafetyCheck } from '#server/presenters/safety-check'
import { explainStop } from '#server/services/theatre/explain-stop'
import { getSafetyCheck } from '#server/services/theatre/get-safety-check'
import { defineStaffApi, idParams } from '#server/utils/api'
import { explainStopBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: explainStopBody }, async ({ ctx, params, body }) => {
  await explainStop(ctx, { ...body, caseId: params.id })
  return presentSafetyCheck(await getSafetyCheck(ctx, params.id), ctx.actor, ctx.now)
})
