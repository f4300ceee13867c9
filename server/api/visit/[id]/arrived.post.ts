import { presentVisit } from '#server/presenters/visit'
import { changeVisitState } from '#server/services/visit/change-visit-state'
import { defineStaffApi, idParams } from '#server/utils/api'
import { rowVersionBody } from '#shared/contracts/visit'

export default defineStaffApi({ params: idParams, body: rowVersionBody }, async ({ ctx, params, body }) => presentVisit(await changeVisitState(ctx, { visitId: params.id, step: 'arrived', rowVersion: body.rowVersion })))
