import { presentToBook } from '#server/presenters/visit'
import { listToBook } from '#server/services/visit/list-to-book'
import { defineStaffApi } from '#server/utils/api'
import { toBookQuery } from '#shared/contracts/visit'

export default defineStaffApi({ query: toBookQuery }, async ({ ctx, query }) => presentToBook(await listToBook(ctx, query)))
