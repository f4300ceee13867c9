import { presentList } from '#server/presenters/theatre'
import { addList } from '#server/services/theatre/add-list'
import { defineStaffApi } from '#server/utils/api'
import { addListBody } from '#shared/contracts/theatre'

export default defineStaffApi({ body: addListBody }, async ({ ctx, body }) => presentList(await addList(ctx, body)))
