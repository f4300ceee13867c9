import { presentStanding } from '#server/presenters/pathway'
import { changeReferral } from '#server/services/referral/change-referral'
import { defineStaffApi, idParams } from '#server/utils/api'
import { referralBody } from '#shared/contracts/referral'

export default defineStaffApi({ params: idParams, body: referralBody }, async ({ ctx, params, body }) => {
  const { pathway } = await changeReferral(ctx, { ...body, pathwayId: params.id })
  return presentStanding(pathway)
})
