import { presentMe } from '#server/presenters/people'
import { getMe } from '#server/services/people/get-me'
import { defineStaffApi } from '#server/utils/api'

export default defineStaffApi({}, async ({ ctx }) => presentMe(await getMe(ctx), process.env.DAWNWARD_DEMO === '1'))
