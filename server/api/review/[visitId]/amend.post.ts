import { amendReview } from '#server/services/review/sign-review'
import { defineStaffApi } from '#server/utils/api'
import { amendReviewBody, visitParams } from '#shared/contracts/review'

export default defineStaffApi({ params: visitParams, body: amendReviewBody }, async ({ ctx, params, body }) => {
  const { review, urgency, escalation, unchecked } = await amendReview(ctx, { visitId: params.visitId, ...body })
  return { version: review.version, urgency, escalation: escalation ? { id: escalation.id, number: escalation.number } : null, unchecked }
})
