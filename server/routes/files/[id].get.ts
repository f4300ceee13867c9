import { send, setResponseHeaders } from 'h3'
import { openAttachment } from '#server/services/referral/add-attachment'
import { defineStaffApi, idParams } from '#server/utils/api'

/** One attachment, to be saved and never shown as a page of ours: whatever is in it, the browser runs nothing. */
export default defineStaffApi({ params: idParams }, async ({ ctx, params, event }) => {
  const { file, bytes } = await openAttachment(ctx, params.id)
  setResponseHeaders(event, {
    'content-type': file.mediaType,
    'content-length': bytes.byteLength,
    'content-disposition': `attachment; filename="file.${file.mediaType.split('/')[1]}"; filename*=UTF-8''${encodeURIComponent(file.name).replace(/['()*]/g, each => `%${each.charCodeAt(0).toString(16).toUpperCase()}`)}`,
    'x-content-type-options': 'nosniff',
    'content-security-policy': 'default-src \'none\'; sandbox',
    'cross-origin-resource-policy': 'same-origin',
  })
  return send(event, bytes)
})
