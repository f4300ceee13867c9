import { presentRisk } from '#server/presenters/theatre'
import { assessRisk } from '#server/services/theatre/assess-risk'
import { defineStaffApi, idParams } from '#server/utils/api'
import { riskBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: riskBody }, async ({ ctx, params, body }) => presentRisk(await assessRisk(ctx, { ...body, pathwayId: params.id })))
