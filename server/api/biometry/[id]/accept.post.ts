import { presentBiometry } from '#server/presenters/biometry'
import { acceptBiometry } from '#server/services/biometry/accept-biometry'
import { defineStaffApi, idParams } from '#server/utils/api'
import { acceptBiometryBody } from '#shared/contracts/biometry'

export default defineStaffApi({ params: idParams, body: acceptBiometryBody }, async ({ ctx, params, body }) => presentBiometry(await acceptBiometry(ctx, { ...body, pathwayId: params.id })))
