import { presentVisit } from '#server/presenters/visit'
import { bookVisit } from '#server/services/visit/book-visit'
import { defineStaffApi } from '#server/utils/api'
import { bookVisitBody } from '#shared/contracts/visit'

export default defineStaffApi({ body: bookVisitBody }, async ({ ctx, body }) => presentVisit(await bookVisit(ctx, body)))
