import { presentSavedFilters } from '#server/presenters/pathway'
import { forgetFilter } from '#server/services/pathway/forget-filter'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentSavedFilters(await forgetFilter(ctx, params.id)))
