import https from 'node:https'
import http from 'node:http'
import twilio from 'twilio'
import { clockOffsetMs } from '#server/utils/clock'

/** What a send can end in. `unknown` means that the provider may or may not have it: ask before sending again. */
export type SendResult = { outcome: 'sent', providerId: string } | { outcome: 'refused', why: string, permanent: boolean } | { outcome: 'unknown', why: string }

export interface TextToSend { to: string, body: string, marker: string, notBefore: Date }

const timeoutMs = 15_000

/** What the SDK hands to its client, and what it reads from the answer. */
interface SdkRequest { method: string, uri: string, username?: string, password?: string, params?: object, data?: object }
interface SdkAnswer { statusCode: number, body: unknown, headers: http.IncomingHttpHeaders }

/** The SDK's own client has a fixed host and no keep-alive; this one swaps the host and keeps connections. */
class KeepAliveClient {
  private readonly agent: http.Agent
  constructor(private readonly host: string | undefined) {
    this.agent = host?.startsWith('http:') ? new http.Agent({ keepAlive: true, maxSockets: 32 }) : new https.Agent({ keepAlive: true, maxSockets: 32 })
  }

  request(options: SdkRequest): Promise<SdkAnswer> {
    const wanted = new URL(options.uri)
    const url = this.host ? new URL(wanted.pathname, this.host) : wanted
    for (const [name, value] of Object.entries((options.params ?? {}) as Record<string, unknown>)) url.searchParams.set(name, String(value))
    const form = new URLSearchParams(Object.entries((options.data ?? {}) as Record<string, unknown>).filter(([, value]) => value !== undefined).map(([name, value]) => [name, String(value)]))
    const body = options.method.toUpperCase() === 'POST' ? form.toString() : ''
    const send = url.protocol === 'http:' ? http.request : https.request
    return new Promise((resolve, reject) => {
      const request = send(url, { method: options.method.toUpperCase(), agent: this.agent, timeout: timeoutMs, headers: { 'authorization': `Basic ${Buffer.from(`${options.username}:${options.password}`).toString('base64')}`, 'content-type': 'application/x-www-form-urlencoded', 'content-length': Buffer.byteLength(body), 'accept': 'application/json' } }, (answer) => {
        const parts: Buffer[] = []
        answer.on('data', (part: Buffer) => parts.push(part))
        answer.on('end', () => resolve({ statusCode: answer.statusCode ?? 0, body: parseJson(Buffer.concat(parts).toString('utf8')), headers: answer.headers }))
        answer.on('error', reject)
      })
      request.on('timeout', () => request.destroy(new Error('the text service did not answer in time')))
      request.on('error', reject)
      request.end(body)
    })
  }
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text)
  }
  catch {
    return { message: 'the text service answered with something that is not JSON' }
  }
}

let made: ReturnType<typeof twilio> | undefined
function client() {
  const account = process.env.DAWNWARD_TEXT_ACCOUNT
  const token = process.env.DAWNWARD_TEXT_TOKEN
  if (!account || !token) return undefined
  made ??= twilio(account, token, { httpClient: new KeepAliveClient(process.env.DAWNWARD_TEXT_HOST) as never })
  return made
}

export async function sendText(text: TextToSend): Promise<SendResult> {
  const service = client()
  if (!service) return { outcome: 'refused', why: 'No text service is set up.', permanent: true }
  try {
    const sent = await service.messages.create({ to: text.to, from: process.env.DAWNWARD_TEXT_FROM ?? '+447700900000', body: text.body, statusCallback: `${process.env.DAWNWARD_ORIGIN ?? 'http://127.0.0.1:3000'}/webhooks/text/status?m=${text.marker}` })
    return { outcome: 'sent', providerId: sent.sid }
  }
  catch (error) {
    const { status, code, message } = error as { status?: number, code?: number | string, message?: string }
    const why = `${code ?? status ?? 'no answer'}: ${message ?? ''}`.slice(0, 200)
    // A failure on their side says nothing about whether the text was taken.
    if (status === undefined || status >= 500) return { outcome: 'unknown', why }
    return { outcome: 'refused', why, permanent: status !== 429 }
  }
}

/** Whether the provider already has this message: the question after a crash or a lost answer. Each body holds its own link or number, so it is matched whole. */
export async function findText(text: TextToSend): Promise<string | undefined> {
  const service = client()
  if (!service) return undefined
  // The provider's clock is the real one, whatever the demo's says.
  const since = new Date(text.notBefore.getTime() - clockOffsetMs() - 60_000)
  const found = await service.messages.list({ to: text.to, dateSentAfter: since, limit: 200 })
  return found.find(each => each.body === text.body)?.sid
}
