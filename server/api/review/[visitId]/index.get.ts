import { presentReviewSheet } from '#server/presenters/review'
import { getReview } from '#server/services/review/get-review'
import { defineStaffApi } from '#server/utils/api'
import { visitParams } from '#shared/contracts/review'

export default defineStaffApi({ params: visitParams }, async ({ ctx, params }) => presentReviewSheet(await getReview(ctx, params.visitId), ctx.actor))
