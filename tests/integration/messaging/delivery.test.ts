import { createServer } from 'node:net'
import type { AddressInfo, Socket } from 'node:net'
import fc from 'fast-check'
import { asc, eq } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { startFakes } from '#mocks/start-fakes'
import type { RunningFakes } from '#mocks/start-fakes'
import { inboundTexts, messageEvents, messages, pathways, patients, symptomChecks } from '#server/db/schema/index'
import { closeMail } from '#server/gateways/mail'
import { sweepUnansweredChecks } from '#server/jobs/messaging/sweep-unanswered-checks'
import { listReplies } from '#server/services/messaging/list-replies'
import { recordReceipt } from '#server/services/messaging/record-receipt'
import { sendDueMessages } from '#server/services/messaging/send-due-messages'
import { addPatient, ids, openMessagingDatabase } from '#tests/factories/messaging'
import { inZone } from '#shared/domain/messaging/quiet-hours'

const account = `AC${'0'.repeat(32)}`
const day = new Date('2026-10-15T10:00:00Z')
const night = new Date('2026-10-15T20:30:00Z')
const hour = 3_600_000
let fakes: RunningFakes
let database: Awaited<ReturnType<typeof openMessagingDatabase>>

beforeAll(async () => {
  fakes = await startFakes({ textPort: 0, mailPort: 0, controlPort: 0, origin: 'http://127.0.0.1:9', account, token: 'a-token-for-tests-only' })
  Object.assign(process.env, { DAWNWARD_TEXT_HOST: fakes.textUrl, DAWNWARD_TEXT_ACCOUNT: account, DAWNWARD_TEXT_TOKEN: 'a-token-for-tests-only', DAWNWARD_MAIL_URL: fakes.mailUrl, DAWNWARD_ORIGIN: 'http://127.0.0.1:9' })
})
afterAll(async () => {
  closeMail()
  await fakes.stop()
})
beforeEach(async () => {
  fakes.store.reset()
  fakes.mails.length = 0
  database = await openMessagingDatabase()
  await addPatient(database.db, day)
  return () => database.close()
})

type NewMessage = typeof messages.$inferInsert
let written = 0
async function due(changes: Partial<NewMessage> = {}, at = day): Promise<string> {
  const [row] = await database.db.insert(messages).values({ kind: 'visit.reminder', recipientKey: `patient:${ids.patient}`, subjectKey: 'visit:1', occasion: `test ${++written}`, channel: 'text', patientId: ids.patient, pathwayId: ids.pathway, siteId: ids.site, toAddress: '+447700900377', body: `Text ${written}.`, dueAt: at, expiresAt: new Date(at.getTime() + 20 * hour), createdAt: at, ...changes }).returning({ id: messages.id })
  return row?.id ?? ''
}
const send = (now: Date) => sendDueMessages({ db: database.db, now }, () => now, 1_000)
const rows = async () => database.db.select().from(messages).orderBy(asc(messages.createdAt), asc(messages.occasion))
const states = async () => (await rows()).map(row => `${row.channel} ${row.state}`).sort()
const eventsOf = async (id: string) => (await database.db.select().from(messageEvents).where(eq(messageEvents.messageId, id)).orderBy(asc(messageEvents.at))).map(event => event.kind)
const nurse = (now: Date) => ({ db: database.db, now, actor: { personId: ids.person, name: 'A nurse', roles: [{ role: 'nurse' as const, siteId: ids.site, practiceId: null }] } })

describe('asked again when it would leave', () => {
  it('waits for the end of quiet hours, and then leaves', async () => {
    const id = await due({}, night)
    await send(night)
    const [row] = await rows()
    expect([row?.state, row?.dueAt.toISOString()]).toEqual(['queued', '2026-10-16T07:00:00.000Z'])
    expect(fakes.store.texts).toHaveLength(0)
    expect(await eventsOf(id)).toEqual(['waits'])
    await send(new Date('2026-10-16T07:00:00Z'))
    expect(fakes.store.texts).toHaveLength(1)
  })

  it('expires, and shows as expired, when quiet hours end too late for it', async () => {
    await due({ expiresAt: new Date(night.getTime() + hour) }, night)
    await send(night)
    expect(await states()).toEqual(['text expired'])
  })

  it('becomes a call when news of a cancelled visit cannot arrive in time', async () => {
    await due({ kind: 'visit.cancelled', expiresAt: new Date(night.getTime() + hour) }, night)
    await send(night)
    expect((await listReplies(nurse(night), { limit: 10 })).stuck.map(({ message }) => message.lastError)).toEqual(['cannot be reached in time by message'])
  })

  it('sends an alert to staff and the answer to somebody worried at night', async () => {
    await due({ kind: 'answer.worried' }, night)
    await due({ kind: 'alert.surgeon', patientId: null, pathwayId: null, personId: ids.person, recipientKey: `person:${ids.person}`, toAddress: '+447700900655' }, night)
    await send(night)
    expect(fakes.store.texts).toHaveLength(2)
  })

  it('sends one of two that would say the same, also when two senders look at once', async () => {
    for (const eye of ['right', 'left']) await due({ kind: 'safety.day3', subjectKey: `pathway:${eye}`, topic: 'symptom check 2026-10-15' })
    const other = database.connect()
    await Promise.all([send(day), sendDueMessages({ db: other, now: day }, () => day, 1_000)])
    await send(day)
    expect(fakes.store.texts).toHaveLength(1)
    expect(await states()).toEqual(['text sent', 'text withdrawn'])
    const kinds = (await database.db.select().from(messageEvents)).map(event => event.kind)
    expect(kinds.filter(kind => kind === 'dropped')).toHaveLength(1)
  })

  it('never drops the alert of one escalation for that of another', async () => {
    for (const number of [1, 2]) await due({ kind: 'alert.surgeon', subjectKey: `escalation:${number}`, patientId: null, pathwayId: null, personId: ids.person, recipientKey: `person:${ids.person}`, topic: 'alert 0 now' })
    await send(day)
    expect(fakes.store.texts).toHaveLength(2)
  })

  it('sends nothing after a death, and no reminder of a closed pathway', async () => {
    await due()
    await database.db.update(pathways).set({ state: 'closed', closeReason: 'moved-away' })
    await send(day)
    await database.db.update(patients).set({ diedOn: '2026-10-14' })
    await due({ kind: 'answer.received' })
    await send(day)
    expect(fakes.store.texts).toHaveLength(0)
    expect(await states()).toEqual(['text withdrawn', 'text withdrawn'])
  })

  it('follows the wall clock of the site on the days when clocks change', async () => {
    // 25 October 2026 (back) and 28 March 2027 (forward), Europe/London.
    const inPeace = fc.integer({ min: 0, max: 36 * 60 }).chain(minutes => fc.constantFrom('2026-10-24T12:00:00Z', '2027-03-27T12:00:00Z').map(start => new Date(new Date(start).getTime() + minutes * 60_000)))
    await fc.assert(fc.asyncProperty(inPeace, async (at) => {
      fakes.store.reset()
      await database.db.execute('update messages set state = \'withdrawn\' where state in (\'queued\', \'sending\')')
      const id = await due({}, at)
      await send(at)
      const [row] = await database.db.select().from(messages).where(eq(messages.id, id))
      const wall = inZone(at, 'Europe/London').hour
      const quiet = wall >= 20 || wall < 8
      expect(fakes.store.texts).toHaveLength(quiet ? 0 : 1)
      if (quiet) expect(inZone(row?.dueAt ?? at, 'Europe/London').toPlainTime().toString()).toBe('08:00:00')
    }), { numRuns: 40 })
  })
})

describe('when it cannot be known', () => {
  it('a text whose look-up keeps failing reaches the nurse after bounded tries, and a late receipt takes it off again', async () => {
    fakes.store.mode = 'error'
    const id = await due()
    let now = day
    for (let tries = 0; tries < 12; tries++) {
      await send(now)
      now = new Date(now.getTime() + 6 * 60_000)
    }
    const [row] = await rows()
    expect([row?.state, row?.attempts, row?.lastError]).toEqual(['failed', 8, 'It is not known whether this arrived. Ring.'])
    expect((await listReplies(nurse(now), { limit: 10 })).stuck.map(({ message }) => message.id)).toEqual([id])
    await recordReceipt({ db: database.db, now }, { providerId: 'SM77', status: 'delivered', marker: id })
    expect((await listReplies(nurse(now), { limit: 10 })).stuck).toEqual([])
  })

  it('a mail whose answer was lost is sent again with the same Message-ID, and the history says that it may arrive twice', async () => {
    const seen: string[] = []
    const server = createServer((socket: Socket) => {
      let data = false
      socket.write('220 here\r\n')
      socket.on('error', () => undefined)
      socket.on('data', (part) => {
        const text = part.toString()
        if (data) {
          seen.push(/^Message-ID: (.*)$/im.exec(text)?.[1]?.trim() ?? '')
          return socket.destroy()
        }
        data = /^DATA/im.test(text)
        socket.write(data ? '354 go\r\n' : '250 ok\r\n')
      })
    })
    await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
    closeMail()
    process.env.DAWNWARD_MAIL_URL = `smtp://127.0.0.1:${(server.address() as AddressInfo).port}`
    const id = await due({ channel: 'email', toAddress: 'w.saltonby@example.org' })
    await send(day)
    await send(new Date(day.getTime() + 60_000))
    server.close()
    closeMail()
    process.env.DAWNWARD_MAIL_URL = fakes.mailUrl
    await send(new Date(day.getTime() + 10 * 60_000))
    expect(seen).toEqual([`<${id}@dawnward.example.org>`, `<${id}@dawnward.example.org>`])
    expect((await rows())[0]?.state).toBe('sent')
    expect((await eventsOf(id)).filter(kind => kind === 'sent-again')).toHaveLength(2)
    expect(fakes.mails).toHaveLength(1)
  })
})

describe('falling back', () => {
  it('goes from the text to e-mail, and from a refused e-mail to a call', async () => {
    await due({ toAddress: '+1' })
    await send(day)
    expect(await states()).toEqual(['email queued', 'text failed'])
    expect((await listReplies(nurse(day), { limit: 10 })).stuck).toEqual([])
    fakes.refuseMail = true
    await send(day).finally(() => fakes.refuseMail = false)
    expect(await states()).toEqual(['email failed', 'text failed'])
    expect((await listReplies(nurse(day), { limit: 10 })).stuck.map(({ message }) => message.channel)).toEqual(['email'])
  })

  it('sends no second e-mail when the announcement had gone both ways', async () => {
    const same = { kind: 'visit.changed' as const, subjectKey: 'visit:9', topic: 'visit 9' }
    await due({ ...same, occasion: 'change 2 by text', toAddress: '+1' })
    await due({ ...same, occasion: 'change 2 by email', channel: 'email', toAddress: 'w.saltonby@example.org' })
    await send(day)
    await send(day)
    expect(await states()).toEqual(['email sent', 'text failed'])
    expect(fakes.mails).toHaveLength(1)
    expect((await listReplies(nurse(day), { limit: 10 })).stuck).toEqual([])
  })
})

describe('a day-3 check that nobody answers', () => {
  const later = new Date(day.getTime() + 25 * hour)
  const sweep = (now = later) => sweepUnansweredChecks({ db: database.db, now })
  const sent = (changes: Partial<NewMessage> = {}) => due({ kind: 'safety.day3', subjectKey: `pathway:${ids.pathway}`, occasion: 'after 2026-10-12', state: 'delivered', sentAt: day, ...changes })

  it('is on the nurse\'s list after 24 hours, once, whatever runs twice at once', async () => {
    await sent()
    expect(await sweep(new Date(day.getTime() + 23 * hour))).toBe(0)
    const other = database.connect()
    const flagged = await Promise.all([sweep(), sweepUnansweredChecks({ db: other, now: later })])
    expect(flagged.reduce((sum, each) => sum + each, 0)).toBe(1)
    expect(await sweep()).toBe(0)
    expect((await listReplies(nurse(later), { limit: 10 })).replies.map(({ reply }) => reply.meaning)).toEqual(['no-answer'])
  })

  it('is not, when the patient told us on the page or wrote anything', async () => {
    await sent()
    await database.db.insert(symptomChecks).values({ patientId: ids.patient, pathwayId: ids.pathway, answers: {}, at: new Date(day.getTime() + hour) })
    expect(await sweep()).toBe(0)
    await sent({ occasion: 'after 2026-10-13', sentAt: new Date(day.getTime() + 2 * hour) })
    await database.db.insert(inboundTexts).values({ providerId: 'SM1', fromNumber: '+447700900377', patientId: ids.patient, siteId: ids.site, body: 'fine', meaning: 'words', receivedAt: new Date(day.getTime() + 3 * hour) })
    expect(await sweep(new Date(day.getTime() + 40 * hour))).toBe(0)
  })

  it('is, when it could not be sent in time; nobody is rung about a patient who died', async () => {
    await sent({ state: 'expired', sentAt: null })
    await database.db.update(patients).set({ diedOn: '2026-10-15' })
    expect(await sweep()).toBe(0)
    await database.db.update(patients).set({ diedOn: null })
    expect(await sweep()).toBe(1)
  })
})
