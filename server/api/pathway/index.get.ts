import { presentPathways } from '#server/presenters/patient'
import { listPathways, pageOfPathways } from '#server/services/pathway/list-pathways'
import { defineStaffApi } from '#server/utils/api'
import { pathwaysQuery } from '#shared/contracts/patient'

export default defineStaffApi({ query: pathwaysQuery }, async ({ ctx, query }) => presentPathways(await listPathways(ctx, query), pageOfPathways, ctx.now))
