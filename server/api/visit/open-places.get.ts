import { presentOpenPlaces } from '#server/presenters/visit'
import { listOpenPlaces } from '#server/services/visit/list-open-places'
import { defineStaffApi } from '#server/utils/api'
import { openPlacesQuery } from '#shared/contracts/visit'

export default defineStaffApi({ query: openPlacesQuery }, async ({ ctx, query }) => presentOpenPlaces(await listOpenPlaces(ctx, query)))
