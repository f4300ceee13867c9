import { mergePatients } from '#server/services/patient/merge-patients'
import { defineStaffApi, idParams } from '#server/utils/api'
import { mergeBody } from '#shared/contracts/patient'

export default defineStaffApi({ params: idParams, body: mergeBody }, async ({ ctx, params, body }) => {
  const { mergeId, patientId, pathwayIds } = await mergePatients(ctx, { ...body, keptId: params.id })
  return { mergeId, patientId, pathwayIds }
})
