import { signOut } from '#server/services/people/sign-out'
import { defineStaffApi } from '#server/utils/api'
import { signOutBody } from '#shared/contracts/people'

export default defineStaffApi({ body: signOutBody }, async ({ ctx, body, event }) => {
  await signOut(ctx, { sessionId: event.context.sessionId ?? '', everywhere: body.everywhere })
  await clearUserSession(event)
  return { signedOut: true }
})
