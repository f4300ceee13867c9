import { openLink } from '#server/services/messaging/open-link'
import { definePublicApi } from '#server/utils/api'
import { writeLinkId } from '#server/utils/link-session'
import { spendTry } from '#server/utils/rate-limit'
import { linkParams, openLinkBody } from '#shared/contracts/messaging'

// Public: the birth date is how a patient proves who they are. Limited by address as well as by the link's own lock.
export default definePublicApi({ params: linkParams, body: openLinkBody }, async ({ ctx, params, body, event }) => {
  await spendTry(event, 'open-link', 'any', 30, 900)
  const { linkId } = await openLink(ctx, { token: params.token, birthDate: body.birthDate })
  await writeLinkId(event, linkId)
  return { opened: true }
})
