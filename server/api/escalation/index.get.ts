import { presentEscalation } from '#server/presenters/escalation'
import { listEscalations } from '#server/services/escalation/list-escalations'
import { defineStaffApi } from '#server/utils/api'
import { escalationsQuery } from '#shared/contracts/escalation'

export default defineStaffApi({ query: escalationsQuery }, async ({ ctx, query }) => ({
  items: (await listEscalations(ctx, query)).map(row => presentEscalation(row, ctx.actor)),
  now: ctx.now.toISOString(),
}))
