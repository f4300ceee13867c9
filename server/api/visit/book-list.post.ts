import { bookList } from '#server/services/visit/book-list'
import { defineStaffApi } from '#server/utils/api'
import { bookListBody } from '#shared/contracts/visit'

export default defineStaffApi({ body: bookListBody }, async ({ ctx, body }) => {
  const { booked, refused } = await bookList(ctx, body)
  return { booked: booked.map(each => ({ ...each, startsAt: each.startsAt.toISOString() })), refused }
})
