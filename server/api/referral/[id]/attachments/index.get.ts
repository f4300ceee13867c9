import { presentAttachments } from '#server/presenters/attachment'
import { listAttachments } from '#server/services/referral/add-attachment'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentAttachments(await listAttachments(ctx, params.id)))
