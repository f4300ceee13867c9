import { presentPathways } from '#server/presenters/pathway'
import { listPathways, pageOfPathways } from '#server/services/pathway/list-pathways'
import { defineStaffApi } from '#server/utils/api'
import { pathwaysQuery } from '#shared/contracts/pathway'

export default defineStaffApi({ query: pathwaysQuery }, async ({ ctx, query }) => presentPathways(await listPathways(ctx, query), pageOfPathways, ctx.now))
