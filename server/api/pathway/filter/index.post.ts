import { presentSavedFilters } from '#server/presenters/pathway'
import { saveFilter } from '#server/services/pathway/save-filter'
import { defineStaffApi } from '#server/utils/api'
import { savedFilterBody } from '#shared/contracts/pathway'

export default defineStaffApi({ body: savedFilterBody }, async ({ ctx, body }) => presentSavedFilters(await saveFilter(ctx, body)))
