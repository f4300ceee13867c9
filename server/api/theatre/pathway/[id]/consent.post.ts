import { presentConsent } from '#server/presenters/theatre'
import { signConsent } from '#server/services/theatre/sign-consent'
import { defineStaffApi, idParams } from '#server/utils/api'
import { consentBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: consentBody }, async ({ ctx, params, body }) => presentConsent(await signConsent(ctx, { ...body, pathwayId: params.id })))
