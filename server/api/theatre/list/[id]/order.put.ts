import { presentList } from '#server/presenters/theatre'
import { orderList } from '#server/services/theatre/order-list'
import { defineStaffApi, idParams } from '#server/utils/api'
import { orderListBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: orderListBody }, async ({ ctx, params, body }) => presentList(await orderList(ctx, { ...body, listId: params.id })))
