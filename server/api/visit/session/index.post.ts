import { presentSession } from '#server/presenters/booking'
import { addSession } from '#server/services/visit/add-session'
import { defineStaffApi } from '#server/utils/api'
import { addSessionBody } from '#shared/contracts/visit'

export default defineStaffApi({ body: addSessionBody }, async ({ ctx, body }) => presentSession(await addSession(ctx, body)))
