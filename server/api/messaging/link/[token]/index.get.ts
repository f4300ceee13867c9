import { presentLinkPage } from '#server/presenters/messaging-link'
import { unscopedLoadLink } from '#server/services/messaging/load-link'
import { definePublicApi } from '#server/utils/api'
import { readLinkId } from '#server/utils/link-session'
import { linkParams, linkQuery } from '#shared/contracts/messaging'

// Public: a patient has no account. Without the sealed cookie of this very link every token answers the same.
export default definePublicApi({ params: linkParams, query: linkQuery }, async ({ ctx, params, query, event }) =>
  presentLinkPage(await unscopedLoadLink(ctx.db, { token: params.token, linkId: await readLinkId(event), now: ctx.now }), query.language, ctx.now))
