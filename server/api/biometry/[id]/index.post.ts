import { presentBiometry } from '#server/presenters/biometry'
import { recordBiometry } from '#server/services/biometry/record-biometry'
import { defineStaffApi, idParams } from '#server/utils/api'
import { recordBiometryBody } from '#shared/contracts/biometry'

export default defineStaffApi({ params: idParams, body: recordBiometryBody }, async ({ ctx, params, body }) => presentBiometry(await recordBiometry(ctx, { ...body, pathwayId: params.id })))
