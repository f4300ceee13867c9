import { presentSafetyCheck } from '#server/presenters/safety-check'
import { getSafetyCheck } from '#server/services/theatre/get-safety-check'
import { signSafetyStep } from '#server/services/theatre/sign-safety-step'
import { defineStaffApi } from '#server/utils/api'
import { safetyStepBody, safetyStepParams } from '#shared/contracts/theatre'

export default defineStaffApi({ params: safetyStepParams, body: safetyStepBody }, async ({ ctx, params, body }) => {
  await signSafetyStep(ctx, { ...body, caseId: params.id, step: params.step })
  return presentSafetyCheck(await getSafetyCheck(ctx, params.id), ctx.actor, ctx.now)
})
