import { raiseByHand } from '#server/services/escalation/raise-by-hand'
import { defineStaffApi } from '#server/utils/api'
import { raiseByHandBody } from '#shared/contracts/escalation'

export default defineStaffApi({ body: raiseByHandBody }, async ({ ctx, body }) => {
  const { id, number } = await raiseByHand(ctx, body)
  return { id, number }
})
