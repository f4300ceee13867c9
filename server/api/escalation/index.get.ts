import { presentEscalation } from '#server/presenters/escalation'
import { listEscalations } from '#server/services/escalation/list-escalations'
import { defineStaffApi } from '#server/utils/api'
import { escalationsQuery } from '#shared/contracts/escalation'

export default defineStaffApi({ query: escalationsQuery }, async ({ ctx, query }) => {
  const rows = await listEscalations(ctx, { ...query, limit: query.limit + 1 })
  const items = rows.slice(0, query.limit).map(row => presentEscalation(row, ctx.actor))
  const last = rows.length > query.limit ? items.at(-1) : undefined
  return { items, next: last ? { before: last.raisedAt, beforeId: last.id } : null, now: ctx.now.toISOString() }
})
