import { createServer } from 'node:http'
import type { AddressInfo } from 'node:net'
import { eq } from 'drizzle-orm'
import { createApp, createRouter, toNodeListener } from 'h3'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { signWebhook } from '#mocks/signature'
import { closeDatabase } from '#server/db/client'
import { inboundTexts, messages } from '#server/db/schema/index'
import inbound from '#server/routes/webhooks/text/inbound.post'
import status from '#server/routes/webhooks/text/status.post'
import { addDueTexts, addPatient, openMessagingDatabase } from '#tests/factories/messaging'

const token = 'a-token-for-tests-only'
const server = createServer(toNodeListener(createApp().use(createRouter().post('/webhooks/text/inbound', inbound).post('/webhooks/text/status', status))))
let database: Awaited<ReturnType<typeof openMessagingDatabase>>
let origin = ''

beforeAll(async () => {
  database = await openMessagingDatabase()
  const now = new Date()
  await addPatient(database.db, now)
  await addDueTexts(database.db, 1, now)
  await database.db.update(messages).set({ state: 'sent', providerId: 'SM9' })
  await new Promise<void>(resolve => server.listen(0, '127.0.0.1', () => resolve()))
  origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`
  Object.assign(process.env, { DATABASE_URL: database.url, DAWNWARD_ORIGIN: origin, DAWNWARD_TEXT_TOKEN: token })
})
afterAll(async () => {
  server.close()
  await closeDatabase()
  await database.close()
})

async function post(path: string, form: Record<string, string>, signature = signWebhook(token, `${origin}${path}`, form)): Promise<number> {
  const answer = await fetch(`${origin}${path}`, { method: 'POST', headers: { 'content-type': 'application/x-www-form-urlencoded', 'x-twilio-signature': signature }, body: new URLSearchParams(form).toString() })
  return answer.status
}

it('refuses a forged call, an unsigned one, and one whose form was changed after signing', async () => {
  const form = { MessageSid: 'SM1', From: '+447700900377', Body: 'Yes' }
  expect(await post('/webhooks/text/inbound', form, 'forged')).toBe(403)
  expect(await post('/webhooks/text/inbound', form, '')).toBe(403)
  expect(await post('/webhooks/text/inbound', { ...form, Body: 'STOP' }, signWebhook(token, `${origin}/webhooks/text/inbound`, form))).toBe(403)
  expect(await database.db.select().from(inboundTexts)).toHaveLength(0)
})

it('takes a signed reply once, however often it is replayed', async () => {
  for (let time = 0; time < 3; time++) expect(await post('/webhooks/text/inbound', { MessageSid: 'SM1', From: '+447700900377', Body: 'Yes' })).toBe(200)
  expect(await database.db.select().from(inboundTexts)).toHaveLength(1)
})

it('keeps a delivered text delivered when receipts come out of order', async () => {
  for (const each of ['delivered', 'sent', 'queued', 'undelivered']) expect(await post('/webhooks/text/status?m=none', { MessageSid: 'SM9', MessageStatus: each })).toBeLessThan(300)
  const [row] = await database.db.select().from(messages).where(eq(messages.providerId, 'SM9'))
  expect(row?.state).toBe('delivered')
})
