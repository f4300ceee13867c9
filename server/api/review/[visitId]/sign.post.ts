import { signReview } from '#server/services/review/sign-review'
import { defineStaffApi } from '#server/utils/api'
import { signReviewBody, visitParams } from '#shared/contracts/review'

export default defineStaffApi({ params: visitParams, body: signReviewBody }, async ({ ctx, params, body }) => {
  const { review, urgency, escalation, unchecked } = await signReview(ctx, { visitId: params.visitId, ...body })
  return { version: review.version, urgency, escalation: escalation ? { id: escalation.id, number: escalation.number } : null, unchecked }
})
