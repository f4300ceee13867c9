import { presentBiometry } from '#server/presenters/biometry'
import { explainWarning } from '#server/services/biometry/explain-warning'
import { defineStaffApi, idParams } from '#server/utils/api'
import { explainWarningBody } from '#shared/contracts/biometry'

export default defineStaffApi({ params: idParams, body: explainWarningBody }, async ({ ctx, params, body }) => presentBiometry(await explainWarning(ctx, { ...body, pathwayId: params.id })))
