import { presentStanding } from '#server/presenters/pathway'
import { changePathway } from '#server/services/pathway/change-pathway'
import { defineStaffApi, idParams } from '#server/utils/api'
import { holdBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: holdBody }, async ({ ctx, params, body }) =>
  presentStanding(await changePathway(ctx, { pathwayId: params.id, rowVersion: body.rowVersion, action: { kind: 'hold', reason: body.reason, lookAgainOn: body.lookAgainOn } })))
