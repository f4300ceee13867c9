import { presentSavedFilters } from '#server/presenters/pathway'
import { listSavedFilters } from '#server/services/pathway/list-saved-filters'
import { defineStaffApi } from '#server/utils/api'

export default defineStaffApi({}, async ({ ctx }) => presentSavedFilters(await listSavedFilters(ctx.db, ctx.actor.personId)))
