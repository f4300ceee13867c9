import { presentStanding } from '#server/presenters/pathway'
import { sendDischargeLetter } from '#server/services/pathway/send-discharge-letter'
import { defineStaffApi, idParams } from '#server/utils/api'
import { pathwayRowVersionBody } from '#shared/contracts/pathway'

export default defineStaffApi({ params: idParams, body: pathwayRowVersionBody }, async ({ ctx, params, body }) => presentStanding(await sendDischargeLetter(ctx, { ...body, pathwayId: params.id })))
