import { defineEventHandler, getRequestHeader, getRequestURL } from 'h3'
import { sendProblem } from '#server/utils/problem'

/** Routes that take a file read it in parts and stop at their own limit; this is the outer one. */
const takesFile = /^\/api\/(referral\/(import|fhir|[^/]+\/attachments)|biometry\/[^/]+\/dicom)\b/
const maxFileBytes = 21_000_000
const maxOtherBytes = 2_000_000

const changing = new Set(['POST', 'PUT', 'PATCH', 'DELETE'])

/**
 * A body that says it is too large is refused unread. Cross-site request forgery: a change through the API must come from our own pages. Both the custom header,
 * which a foreign form cannot set, and the Origin are looked at. Webhooks prove themselves by signature.
 */
export default defineEventHandler((event) => {
  if (!changing.has(event.method) || !event.path.startsWith('/api/')) return
  const length = Number(getRequestHeader(event, 'content-length') ?? 0)
  if (length > (takesFile.test(event.path) ? maxFileBytes : maxOtherBytes)) {
    return sendProblem(event, { type: 'urn:dawnward:request.too-large', title: 'This is larger than what can be taken in.', status: 413, code: 'request.too-large', detail: `Up to ${takesFile.test(event.path) ? 20 : 2} MB.` })
  }
  const origin = getRequestHeader(event, 'origin')
  const own = getRequestURL(event, { xForwardedHost: true, xForwardedProto: true }).host
  let foreign = false
  if (origin) {
    try {
      foreign = new URL(origin).host !== own
    }
    catch {
      foreign = true
    }
  }
  if (foreign || getRequestHeader(event, 'x-dawnward-csrf') !== '1') {
    return sendProblem(event, { type: 'urn:dawnward:request.not-from-here', title: 'This request did not come from our own pages.', status: 403, code: 'request.not-from-here', detail: 'Reload the page and try again.' })
  }
})
