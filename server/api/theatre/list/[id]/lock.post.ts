import { presentList } from '#server/presenters/theatre'
import { setListLock } from '#server/services/theatre/set-list-lock'
import { defineStaffApi, idParams } from '#server/utils/api'
import { lockListBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: lockListBody }, async ({ ctx, params, body }) => presentList(await setListLock(ctx, { ...body, listId: params.id, locked: true })))
