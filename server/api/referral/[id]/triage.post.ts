import { presentStanding } from '#server/presenters/pathway'
import { triageReferral } from '#server/services/referral/triage-referral'
import { defineStaffApi, idParams } from '#server/utils/api'
import { triageBody } from '#shared/contracts/referral'

export default defineStaffApi({ params: idParams, body: triageBody }, async ({ ctx, params, body }) => {
  const { pathway, fellow, question } = await triageReferral(ctx, { ...body, pathwayId: params.id })
  return { ...presentStanding(pathway), fellow: fellow ? presentStanding(fellow) : null, question }
})
