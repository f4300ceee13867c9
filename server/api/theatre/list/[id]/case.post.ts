import { presentCase } from '#server/presenters/theatre'
import { addCase } from '#server/services/theatre/add-case'
import { defineStaffApi, idParams } from '#server/utils/api'
import { addCaseBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: addCaseBody }, async ({ ctx, params, body }) => presentCase(await addCase(ctx, { ...body, listId: params.id })))
