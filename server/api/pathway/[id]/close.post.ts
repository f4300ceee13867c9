import { presentStanding } from '#server/presenters/pathway'
import { changePathway } from '#server/services/pathway/change-pathway'
import { defineStaffApi, idParams } from '#server/utils/api'
import { closePathwayBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: closePathwayBody }, async ({ ctx, params, body }) =>
  presentStanding(await changePathway(ctx, { pathwayId: params.id, rowVersion: body.rowVersion, action: { kind: 'close', reason: body.reason, words: body.words } })))
