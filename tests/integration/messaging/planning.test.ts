import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { messageEvents, messages, patientLinks, pathways, patients, sites, visits } from '#server/db/schema/index'
import { queuePatientMessages, queueVisitMessages, withdrawMessages } from '#server/services/messaging/queue-messages'
import { addPatient, ids, openMessagingDatabase } from '#tests/factories/messaging'

const now = new Date('2026-10-12T10:00:00Z')
const firstPlace = new Date('2026-10-22T08:20:00Z')
const otherPlace = new Date('2026-10-23T08:20:00Z')
let database: Awaited<ReturnType<typeof openMessagingDatabase>>

beforeEach(async () => {
  database = await openMessagingDatabase()
  await addPatient(database.db, now)
  return () => database.close()
})

async function loaded() {
  const [[patient], [pathway], [site], [visit]] = await Promise.all([database.db.select().from(patients), database.db.select().from(pathways), database.db.select().from(sites), database.db.select().from(visits)])
  if (!patient || !pathway || !site || !visit) throw new Error('nothing was added')
  return { patient, pathway, site, visit }
}

/** The operation is planned for a time: what an earlier time had queued is taken back. */
async function planSurgery(startsAt: Date): Promise<void> {
  const { patient, pathway, site } = await loaded()
  await database.db.transaction(async (tx) => {
    await withdrawMessages(tx, { pathwayId: pathway.id, kinds: ['surgery.reminder'], why: 'moved', now })
    await queuePatientMessages(tx, { occasion: { kind: 'surgery', startsAt }, patient, pathway, site, subjectKey: `case:${pathway.id}`, values: { place: site.name }, at: startsAt, now })
  })
}
const reminders = async () => (await database.db.select().from(messages).where(eq(messages.kind, 'surgery.reminder'))).map(row => `${row.occasion} ${row.state}`).sort()

describe('planning', () => {
  it('queues the reminders of a time anew when an operation is moved away and back', async () => {
    await planSurgery(firstPlace)
    await planSurgery(otherPlace)
    await planSurgery(firstPlace)
    expect(await reminders()).toEqual(['1 day before 2026-10-22T09:20 queued', '1 day before 2026-10-23T09:20 withdrawn', '7 days before 2026-10-22T09:20 queued', '7 days before 2026-10-23T09:20 withdrawn'])
  })

  it('never queues a sent reminder again, nor one that was settled by telephone', async () => {
    await planSurgery(firstPlace)
    const rows = await database.db.select().from(messages)
    const [week, day] = ['7 days', '1 day'].map(start => rows.find(row => row.occasion.startsWith(start))?.id ?? '')
    await database.db.update(messages).set({ state: 'sent', sentAt: now }).where(eq(messages.id, week ?? ''))
    await database.db.update(messages).set({ state: 'withdrawn' }).where(eq(messages.id, day ?? ''))
    await database.db.insert(messageEvents).values({ messageId: day ?? '', at: now, kind: 'settled' })
    await planSurgery(firstPlace)
    expect(await reminders()).toEqual(['1 day before 2026-10-22T09:20 withdrawn', '7 days before 2026-10-22T09:20 sent'])
  })

  it('writes no spare link when the same occasion is planned again', async () => {
    const { patient, pathway, site } = await loaded()
    for (let time = 0; time < 3; time++) await database.db.transaction(tx => queuePatientMessages(tx, { occasion: { kind: 'surgery-done', surgeryDate: '2026-10-12' }, patient, pathway, site, subjectKey: `pathway:${pathway.id}`, values: {}, now }))
    const rows = await database.db.select().from(messages)
    expect(rows.map(row => row.kind).sort()).toEqual(['safety.day3', 'safety.day7'])
    expect(await database.db.select().from(patientLinks)).toHaveLength(2)
    expect(rows.every(row => /\/v\/[\w-]{20,}/.test(row.body))).toBe(true)
  })

  it('writes the date of a visit in the language of the text', async () => {
    await database.db.update(patients).set({ language: 'pl' })
    const { patient, pathway, site, visit } = await loaded()
    await database.db.transaction(tx => queueVisitMessages(tx, { visit: { ...visit, kind: 'final', startsAt: firstPlace }, patient, pathway, site, now }))
    const rows = await database.db.select().from(messages)
    expect(rows.map(row => row.body)).toEqual(rows.map(() => expect.stringContaining('czwartek, 22 października, godz. 09:20')))
    expect(rows.length).toBe(2)
  })

  it('sends the news of a moved visit by e-mail with a calendar file that says nothing clinical', async () => {
    const { patient, pathway, site, visit } = await loaded()
    await database.db.transaction(tx => queueVisitMessages(tx, { visit: { ...visit, startsAt: firstPlace }, patient, pathway, site, now, change: 'moved' }))
    const [mail] = (await database.db.select().from(messages)).filter(row => row.kind === 'visit.changed' && row.channel === 'email')
    expect(mail?.calendar).toContain('DTSTART:20261022T082000Z')
    expect(mail?.calendar).toContain('STATUS:CONFIRMED')
    expect(mail?.calendar).not.toMatch(/surg|operat|day-one|right|left|Saltonby/i)
  })

  it('plans nothing after a death and nothing for a closed pathway', async () => {
    const { patient, pathway, site, visit } = await loaded()
    await database.db.transaction(tx => queueVisitMessages(tx, { visit, patient: { ...patient, diedOn: '2026-10-11' }, pathway, site, now }))
    await database.db.transaction(tx => queueVisitMessages(tx, { visit, patient, pathway: { ...pathway, state: 'closed' }, site, now, change: 'cancelled' }))
    expect(await database.db.select().from(messages)).toHaveLength(0)
  })

  it('makes a task for the telephone of a person who wants no messages', async () => {
    await database.db.update(patients).set({ messageConsent: false })
    const { patient, pathway, site, visit } = await loaded()
    await database.db.transaction(tx => queueVisitMessages(tx, { visit: { ...visit, kind: 'final', startsAt: firstPlace }, patient, pathway, site, now }))
    expect((await database.db.select().from(messages)).map(row => `${row.state} ${row.lastError}`)).toEqual(['held wants no messages', 'held wants no messages'])
    expect(ids.patient).toBe(patient.id)
  })
})
