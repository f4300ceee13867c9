import { presentPrintedList } from '#server/presenters/theatre'
import { getList } from '#server/services/theatre/get-list'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentPrintedList(await getList(ctx, params.id), ctx.actor, ctx.now))
