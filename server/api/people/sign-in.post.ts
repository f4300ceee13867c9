import { getRequestHeader } from 'h3'
import { signIn } from '#server/services/people/sign-in'
import { definePublicApi } from '#server/utils/api'
import { spendTry } from '#server/utils/rate-limit'
import { writeSessionId } from '#server/utils/session-cookie'
import { signInBody } from '#shared/contracts/people'

// Public: this is how a person becomes known.
export default definePublicApi({ body: signInBody }, async ({ ctx, body, event }) => {
  await spendTry(event, 'sign-in', body.email.toLowerCase(), 20, 300)
  const { sessionId } = await signIn(ctx, { ...body, userAgent: getRequestHeader(event, 'user-agent') ?? '' })
  await writeSessionId(event, sessionId)
  return { signedIn: true }
})
