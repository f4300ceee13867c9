import http from 'node:http'
import { performance } from 'node:perf_hooks'
import { startFakes } from '#mocks/start-fakes'
import { messages } from '#server/db/schema/index'
import { sendDueMessages } from '#server/services/messaging/send-due-messages'
import { addDueTexts, addPatient, openMessagingDatabase } from '#tests/factories/messaging'

/** Texts per second through the whole sender (claim, mark, call, record), beside a bare keep-alive loop to the same fake. */
const count = 1_000
const account = `AC${'0'.repeat(32)}`
const token = 'a-token-for-benches-only'
const fakes = await startFakes({ textPort: 0, mailPort: 0, controlPort: 0, origin: 'http://127.0.0.1:9', account, token })
Object.assign(process.env, { DAWNWARD_TEXT_HOST: fakes.textUrl, DAWNWARD_TEXT_ACCOUNT: account, DAWNWARD_TEXT_TOKEN: token, DAWNWARD_ORIGIN: 'http://127.0.0.1:9' })

const agent = new http.Agent({ keepAlive: true, maxSockets: 25 })
const bare = (index: number) => new Promise<void>((resolve, reject) => {
  const body = new URLSearchParams({ To: `+447700${String(900_000 + index)}`, From: '+447700900000', Body: `Text ${index}` }).toString()
  const request = http.request(`${fakes.textUrl}/2010-04-01/Accounts/${account}/Messages.json`, { method: 'POST', agent, headers: { 'authorization': `Basic ${Buffer.from(`${account}:${token}`).toString('base64')}`, 'content-type': 'application/x-www-form-urlencoded', 'content-length': Buffer.byteLength(body) } }, answer => answer.resume().on('end', resolve))
  request.on('error', reject).end(body)
})
let started = performance.now()
for (let first = 0; first < count; first += 25) await Promise.all(Array.from({ length: 25 }, (_, index) => bare(first + index)))
const barePerSecond = count / (performance.now() - started) * 1_000

const database = await openMessagingDatabase()
await addPatient(database.db, new Date())
await addDueTexts(database.db, count, new Date())
fakes.store.reset()
started = performance.now()
while (await sendDueMessages({ db: database.db, now: new Date() }, () => new Date()) > 0);
const senderPerSecond = count / (performance.now() - started) * 1_000
const states = await database.db.select({ state: messages.state }).from(messages)
console.log(JSON.stringify({ texts: count, barePerSecond: Math.round(barePerSecond), senderPerSecond: Math.round(senderPerSecond), received: fakes.store.texts.length, sent: states.filter(row => row.state === 'sent').length }))
await database.close()
await fakes.stop()
process.exit(0)
