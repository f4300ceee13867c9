import { delay, http, HttpResponse } from 'msw'
import { postSigned } from '#mocks/signature'
import type { TextStore } from '#mocks/text-store'
import type { FakeText } from '#mocks/types'

interface Options { store: TextStore, account: string, token: string, base: string }

function present(text: FakeText, account: string) {
  return { sid: text.sid, account_sid: account, from: text.from, to: text.to, body: text.body, status: text.status, direction: text.direction === 'to-patient' ? 'outbound-api' : 'inbound', date_created: new Date(text.at).toUTCString(), date_updated: new Date(text.at).toUTCString(), date_sent: new Date(text.at).toUTCString(), num_segments: '1', num_media: '0', price: null, price_unit: 'GBP', error_code: null, error_message: null, uri: `/2010-04-01/Accounts/${account}/Messages/${text.sid}.json`, subresource_uris: {}, api_version: '2010-04-01', messaging_service_sid: null }
}

const refusal = (status: number, code: number, message: string) => HttpResponse.json({ code, message, more_info: 'https://example.org/errors', status }, { status })

/** The part of the provider's REST interface that the SDK calls. One set, for the listening fake and for unit tests in one process. */
export function textHandlers({ store, account, token, base }: Options) {
  const mayCall = (request: Request) => request.headers.get('authorization') === `Basic ${Buffer.from(`${account}:${token}`).toString('base64')}`
  const address = `${base}/2010-04-01/Accounts/${account}/Messages`

  const report = async (text: FakeText) => {
    const statuses = store.failing.has(text.to) ? ['undelivered'] : ['delivered']
    for (const status of statuses) {
      await delay(30)
      text.status = status
      if (text.statusCallback) await postSigned(token, text.statusCallback, { MessageSid: text.sid, SmsSid: text.sid, MessageStatus: status, SmsStatus: status, To: text.to, From: text.from, AccountSid: account, ApiVersion: '2010-04-01', ...(status === 'undelivered' ? { ErrorCode: '30003' } : {}) })
    }
  }

  return [
    http.post(`${address}.json`, async ({ request }) => {
      if (!mayCall(request)) return refusal(401, 20003, 'Authenticate')
      const form = new URLSearchParams(await request.text())
      const to = form.get('To') ?? ''
      const body = form.get('Body') ?? ''
      if (store.mode === 'error') return refusal(500, 20500, 'Internal server error')
      if (store.mode === 'rate-limited') return refusal(429, 20429, 'Too many requests')
      if (!/^\+\d{8,15}$/.test(to)) return refusal(400, 21211, `The 'To' number ${to} is not a valid phone number.`)
      if (!body) return refusal(400, 21602, 'Message body is required.')
      if (store.mode === 'slow') await delay(store.slowMs)
      const text = store.add({ direction: 'to-patient', from: form.get('From') ?? '', to, body, status: 'queued', statusCallback: form.get('StatusCallback') })
      void report(text)
      if (store.mode === 'accepted-no-answer') return HttpResponse.error()
      return HttpResponse.json(present(text, account), { status: 201 })
    }),
    http.get(`${address}.json`, ({ request }) => {
      if (!mayCall(request)) return refusal(401, 20003, 'Authenticate')
      if (store.mode === 'error') return refusal(500, 20500, 'Internal server error')
      const query = new URL(request.url).searchParams
      const to = query.get('To')
      const after = query.get('DateSent>') ?? query.get('DateSent')
      const found = store.texts.filter(text => text.direction === 'to-patient' && (!to || text.to === to) && (!after || text.at.slice(0, 10) >= after.slice(0, 10))).reverse().slice(0, Number(query.get('PageSize') ?? 50))
      return HttpResponse.json({ messages: found.map(text => present(text, account)), page: 0, page_size: found.length, first_page_uri: '', next_page_uri: null, previous_page_uri: null, uri: '', start: 0, end: found.length })
    }),
    http.get(`${address}/:sid`, ({ request, params }) => {
      if (!mayCall(request)) return refusal(401, 20003, 'Authenticate')
      const text = store.texts.find(each => `${each.sid}.json` === params.sid)
      return text ? HttpResponse.json(present(text, account)) : refusal(404, 20404, 'The requested resource was not found')
    }),
  ]
}
