import { presentChoices } from '#server/presenters/pathway'
import { listChoices } from '#server/services/pathway/list-choices'
import { defineStaffApi } from '#server/utils/api'

export default defineStaffApi({}, async ({ ctx }) => presentChoices(await listChoices(ctx), ctx.actor))
