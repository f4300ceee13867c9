import { spawn } from 'node:child_process'
import { once } from 'node:events'
import { sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { startFakes } from '#mocks/start-fakes'
import type { RunningFakes } from '#mocks/start-fakes'
import { messages } from '#server/db/schema/index'
import { sendDueMessages } from '#server/services/messaging/send-due-messages'
import { addDueTexts, addPatient, openMessagingDatabase } from '#tests/factories/messaging'

const account = `AC${'0'.repeat(32)}`
const token = 'a-token-for-tests-only'
let fakes: RunningFakes
let database: Awaited<ReturnType<typeof openMessagingDatabase>>

beforeAll(async () => {
  fakes = await startFakes({ textPort: 0, mailPort: 0, controlPort: 0, origin: 'http://127.0.0.1:9', account, token })
  Object.assign(process.env, { DAWNWARD_TEXT_HOST: fakes.textUrl, DAWNWARD_TEXT_ACCOUNT: account, DAWNWARD_TEXT_TOKEN: token, DAWNWARD_MAIL_URL: fakes.mailUrl, DAWNWARD_ORIGIN: 'http://127.0.0.1:9' })
})
afterAll(() => fakes.stop())
beforeEach(async () => {
  fakes.store.reset()
  database = await openMessagingDatabase()
  await addPatient(database.db, new Date())
  return () => database.close()
})

async function drain(db = database.db, until = 60_000): Promise<void> {
  for (const end = Date.now() + until; Date.now() < end;) {
    await sendDueMessages({ db, now: new Date() }, () => new Date(), 1_000)
    const { rows } = await db.execute<{ n: number }>(sql`select count(*)::int as n from messages where state in ('queued', 'sending')`)
    if (rows[0]?.n === 0) return
    await new Promise(resolve => setTimeout(resolve, 50))
  }
}
const bodies = () => fakes.store.texts.map(text => text.body)

describe('sending', () => {
  it('sends each text once when two senders run at the same time', async () => {
    await addDueTexts(database.db, 120, new Date())
    await Promise.all([drain(), drain(database.connect())])
    expect(bodies()).toHaveLength(120)
    expect(new Set(bodies()).size).toBe(120)
  })

  it('asks the provider before sending again when the answer was lost', async () => {
    await addDueTexts(database.db, 1, new Date())
    fakes.store.mode = 'accepted-no-answer'
    await sendDueMessages({ db: database.db, now: new Date() }, () => new Date(), 1_000)
    fakes.store.mode = 'normal'
    await drain()
    expect(bodies()).toHaveLength(1)
    const [row] = await database.db.select().from(messages)
    expect(row?.state).toBe('sent')
    expect(row?.attempts).toBe(2)
  })

  it('tries again after a 500 and a 429, and sends once', async () => {
    await addDueTexts(database.db, 1, new Date())
    for (const mode of ['error', 'rate-limited'] as const) {
      fakes.store.mode = mode
      await sendDueMessages({ db: database.db, now: new Date(Date.now() + 60_000) }, () => new Date(0), 1_000)
    }
    expect(bodies()).toHaveLength(0)
    fakes.store.mode = 'normal'
    await sendDueMessages({ db: database.db, now: new Date(Date.now() + 60_000) }, () => new Date(), 1_000)
    expect(bodies()).toHaveLength(1)
  })

  it('never sends what is past its purpose: it shows as expired', async () => {
    await addDueTexts(database.db, 3, new Date(Date.now() - 2 * 3_600_000))
    await drain()
    expect(bodies()).toHaveLength(0)
    const rows = await database.db.select({ state: messages.state }).from(messages)
    expect(rows.map(row => row.state)).toEqual(['expired', 'expired', 'expired'])
  })

  it('sends 500 texts once each while the worker is killed twenty times', async () => {
    await addDueTexts(database.db, 500, new Date())
    fakes.store.mode = 'slow'
    fakes.store.slowMs = 250
    let killedBusy = 0
    for (let round = 0; round < 20; round++) {
      const worker = spawn(process.execPath, ['--import', 'tsx', 'scripts/worker.ts'], { env: { ...process.env, DATABASE_URL: database.url, DAWNWARD_LEASE_MS: '1000', DAWNWARD_POLL_MS: '50', DAWNWARD_DEMO: '' }, stdio: ['ignore', 'pipe', 'ignore'] })
      await once(worker.stdout, 'data')
      // Spread over the whole of a call, so that a kill falls before, within and after it.
      await new Promise(resolve => setTimeout(resolve, 60 + round * 37 % 420))
      const { rows } = await database.db.execute<{ n: number }>(sql`select count(*)::int as n from messages where state = 'sending'`)
      if (rows[0]?.n) killedBusy++
      worker.kill('SIGKILL')
      await once(worker, 'exit')
    }
    fakes.store.mode = 'normal'
    await drain()
    expect(killedBusy).toBeGreaterThan(3)
    expect(bodies()).toHaveLength(500)
    expect(new Set(bodies()).size).toBe(500)
  }, 180_000)
})
