import { unmergePatients } from '#server/services/patient/merge-patients'
import { defineStaffApi, idParams } from '#server/utils/api'
import { unmergeBody } from '#shared/contracts/patient'

export default defineStaffApi({ params: idParams, body: unmergeBody }, async ({ ctx, params, body }) => {
  const { mergeId, keptId, mergedId, pathwayIds } = await unmergePatients(ctx, { ...body, mergeId: params.id })
  return { mergeId, keptId, mergedId, pathwayIds }
})
