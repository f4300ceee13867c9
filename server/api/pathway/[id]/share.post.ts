import { presentStanding } from '#server/presenters/pathway'
import { sharePathway } from '#server/services/pathway/share-pathway'
import { defineStaffApi, idParams } from '#server/utils/api'
import { shareBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: shareBody }, async ({ ctx, params, body }) => presentStanding(await sharePathway(ctx, { ...body, pathwayId: params.id })))
