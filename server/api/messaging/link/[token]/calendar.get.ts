import { setResponseHeader } from 'h3'
import { getLinkCalendar } from '#server/services/messaging/get-link-calendar'
import { definePublicApi } from '#server/utils/api'
import { readLinkId } from '#server/utils/link-session'
import { linkParams } from '#shared/contracts/messaging'

// Public: the sealed cookie of this link stands for the patient.
export default definePublicApi({ params: linkParams }, async ({ ctx, params, event }) => {
  const file = await getLinkCalendar(ctx, { token: params.token, linkId: await readLinkId(event) })
  setResponseHeader(event, 'content-type', 'text/calendar; charset=utf-8')
  setResponseHeader(event, 'content-disposition', 'attachment; filename="visit.ics"')
  return file
})
