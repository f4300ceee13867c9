import { presentCase } from '#server/presenters/theatre'
import { replaceCase } from '#server/services/theatre/replace-case'
import { defineStaffApi, idParams } from '#server/utils/api'
import { replaceCaseBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: replaceCaseBody }, async ({ ctx, params, body }) => presentCase(await replaceCase(ctx, { ...body, caseId: params.id })))
