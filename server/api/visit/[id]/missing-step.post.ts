import { logMissingStep } from '#server/services/visit/log-missing-step'
import { defineStaffApi, idParams } from '#server/utils/api'
import { missingStepBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: missingStepBody }, async ({ ctx, params, body }) => logMissingStep(ctx, { visitId: params.id, ...body }))
