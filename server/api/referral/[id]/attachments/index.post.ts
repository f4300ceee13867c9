import { presentAttachment } from '#server/presenters/attachment'
import { addAttachment } from '#server/services/referral/add-attachment'
import { maxAttachmentBytes } from '#server/services/referral/check-file'
import { defineStaffApi, idParams } from '#server/utils/api'
import { readUpload } from '#server/utils/upload'

export default defineStaffApi({ params: idParams }, async ({ ctx, params, event }) => {
  const { bytes, name } = await readUpload(event, maxAttachmentBytes)
  return presentAttachment(await addAttachment(ctx, { pathwayId: params.id, bytes, name }))
})
