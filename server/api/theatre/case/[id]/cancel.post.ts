import { presentCase } from '#server/presenters/theatre'
import { cancelCase } from '#server/services/theatre/cancel-case'
import { defineStaffApi, idParams } from '#server/utils/api'
import { cancelCaseBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: cancelCaseBody }, async ({ ctx, params, body }) => presentCase(await cancelCase(ctx, { ...body, caseId: params.id })))
