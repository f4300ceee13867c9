import type { Product } from '#tests/support/product'

export interface Sent { status: number, headers: Headers, body: Record<string, unknown>, bytes: Buffer }

/** Signs in and answers a caller that sends bytes of any type and keeps what comes back as it came. */
export async function fileSender(product: Product, who: string) {
  const answer = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }, body: JSON.stringify({ email: `${who}@example.org`, password: 'dawn-over-ferncombe' }) })
  const cookie = answer.headers.get('set-cookie')?.split(';')[0] ?? ''
  return async (path: string, given?: { body: Uint8Array | string | FormData, type?: string, name?: string }): Promise<Sent> => {
    const headers: Record<string, string> = { cookie, 'x-dawnward-csrf': '1' }
    if (given?.type) headers['content-type'] = given.type
    if (given?.name) headers['x-file-name'] = encodeURIComponent(given.name)
    const body = given?.body instanceof Uint8Array ? new Uint8Array(given.body) : given?.body
    const reply = await fetch(`${product.url}${path}`, { method: given ? 'POST' : 'GET', headers, body })
    const bytes = Buffer.from(await reply.arrayBuffer())
    return { status: reply.status, headers: reply.headers, bytes, body: /json/.test(reply.headers.get('content-type') ?? '') ? JSON.parse(bytes.toString()) as Record<string, unknown> : {} }
  }
}
