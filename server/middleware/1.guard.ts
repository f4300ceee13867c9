import { defineEventHandler, getRequestHeader, getRequestURL } from 'h3'
import { sendProblem } from '#server/utils/problem'

const changing = new Set(['POST', 'PUT', 'PATCH', 'DELETE'])

/**
 * Cross-site request forgery: a change through the API must come from our own pages. Both the custom header,
 * which a foreign form cannot set, and the Origin are looked at. Webhooks prove themselves by signature.
 */
export default defineEventHandler((event) => {
  if (!changing.has(event.method) || !event.path.startsWith('/api/')) return
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
