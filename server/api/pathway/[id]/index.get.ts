import { presentPathway } from '#server/presenters/pathway'
import { getPathway } from '#server/services/pathway/get-pathway'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentPathway(await getPathway(ctx, params.id), ctx.actor, ctx.now))
