import { presentList } from '#server/presenters/theatre'
import { changeList } from '#server/services/theatre/change-list'
import { defineStaffApi, idParams } from '#server/utils/api'
import { changeListBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: changeListBody }, async ({ ctx, params, body }) => presentList(await changeList(ctx, { ...body, listId: params.id })))
