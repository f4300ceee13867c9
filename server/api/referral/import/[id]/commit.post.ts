import { commitImport } from '#server/services/referral/commit-import'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => {
  const { committed, pathwayCount } = await commitImport(ctx, params.id)
  return { id: committed.id, state: committed.state, pathwayCount }
})
