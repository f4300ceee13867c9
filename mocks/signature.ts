import { createHmac } from 'node:crypto'

/** The provider's published webhook signature: HMAC-SHA1, in base64, over the address followed by the sorted form fields. */
export function signWebhook(token: string, url: string, form: Record<string, string>): string {
  const text = Object.keys(form).sort().reduce((sum, key) => sum + key + form[key], url)
  return createHmac('sha1', token).update(Buffer.from(text, 'utf8')).digest('base64')
}

export async function postSigned(token: string, url: string, form: Record<string, string>): Promise<number> {
  try {
    const answer = await fetch(url, { method: 'POST', headers: { 'content-type': 'application/x-www-form-urlencoded', 'x-twilio-signature': signWebhook(token, url, form) }, body: new URLSearchParams(form).toString() })
    return answer.status
  }
  catch {
    // The product may be starting or stopped; the real provider would try again later, this one lets it go.
    return 0
  }
}
