import { presentSafetyCheck } from '#server/presenters/safety-check'
import { getSafetyCheck } from '#server/services/theatre/get-safety-check'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentSafetyCheck(await getSafetyCheck(ctx, params.id), ctx.actor, ctx.now))
