import { saveDraft } from '#server/services/review/save-draft'
import { defineStaffApi } from '#server/utils/api'
import { saveDraftBody, visitParams } from '#shared/contracts/review'

export default defineStaffApi({ params: visitParams, body: saveDraftBody }, async ({ ctx, params, body }) => {
  const draft = await saveDraft(ctx, { visitId: params.visitId, ...body })
  return { rowVersion: draft.rowVersion, savedAt: draft.savedAt.toISOString() }
})
