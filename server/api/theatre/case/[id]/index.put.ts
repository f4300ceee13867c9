import { presentCase } from '#server/presenters/theatre'
import { changeCase } from '#server/services/theatre/change-case'
import { defineStaffApi, idParams } from '#server/utils/api'
import { changeCaseBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: changeCaseBody }, async ({ ctx, params, body }) => presentCase(await changeCase(ctx, { ...body, caseId: params.id })))
