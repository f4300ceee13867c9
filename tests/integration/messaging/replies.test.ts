import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { escalations, inboundTexts, messages, patientLinks, patients, visits } from '#server/db/schema/index'
import { answerSymptoms } from '#server/services/messaging/answer-symptoms'
import { answerVisit } from '#server/services/messaging/answer-visit'
import { presentLinkPage } from '#server/presenters/messaging-link'
import { unscopedLoadLink } from '#server/services/messaging/load-link'
import { openLink } from '#server/services/messaging/open-link'
import { makeLink } from '#server/services/messaging/patient-link'
import { receiveText } from '#server/services/messaging/receive-text'
import { recordReceipt } from '#server/services/messaging/record-receipt'
import { addDueTexts, addPatient, ids, openMessagingDatabase } from '#tests/factories/messaging'

const now = new Date('2026-10-15T10:00:00Z')
const from = '+447700900377'
let database: Awaited<ReturnType<typeof openMessagingDatabase>>
const ctx = () => ({ db: database.db, now })

beforeEach(async () => {
  database = await openMessagingDatabase()
  await addPatient(database.db, now)
  return () => database.close()
})

async function link(): Promise<string> {
  const address = await database.db.transaction(tx => makeLink(tx, { patientId: ids.patient, pathwayId: ids.pathway, visitId: ids.visit, now }))
  return address.split('/v/')[1] ?? ''
}

describe('a reply', () => {
  it('confirms the visit, once, whatever the provider repeats', async () => {
    for (let time = 0; time < 3; time++) await receiveText(ctx(), { providerId: 'SM1', from, body: 'Yes' })
    const [visit] = await database.db.select().from(visits)
    expect(visit?.confirmedAt).toEqual(now)
    expect(visit?.rowVersion).toBe(2)
    expect(await database.db.select().from(inboundTexts)).toHaveLength(1)
  })

  it('of worry raises one escalation of urgency now and tells the surgeon and the patient', async () => {
    await receiveText(ctx(), { providerId: 'SM1', from, body: 'It hurts more than yesterday and I was sick' })
    const raised = await database.db.select().from(escalations)
    expect(raised.map(each => each.urgency)).toEqual(['now'])
    const kinds = (await database.db.select().from(messages)).map(row => `${row.kind} ${row.channel}`).sort()
    expect(kinds).toEqual(['alert.surgeon email', 'alert.surgeon text', 'answer.worried text'])
  })

  it('of STOP ends texts and leaves the visit as it is', async () => {
    await receiveText(ctx(), { providerId: 'SM1', from, body: 'STOP' })
    const [patient] = await database.db.select().from(patients)
    const [visit] = await database.db.select().from(visits)
    expect(patient?.textsStoppedAt).toEqual(now)
    expect([visit?.state, visit?.cannotComeAt]).toEqual(['booked', null])
  })
})

describe('a receipt', () => {
  it('never moves a delivered text back, and a replay changes nothing', async () => {
    await addDueTexts(database.db, 1, now)
    const [row] = await database.db.update(messages).set({ state: 'sent', providerId: 'SM9' }).returning()
    for (const status of ['delivered', 'sent', 'undelivered', 'delivered']) await recordReceipt(ctx(), { providerId: 'SM9', status, marker: row?.id ?? null })
    const [after] = await database.db.select().from(messages)
    expect([after?.state, after?.lastError]).toEqual(['delivered', null])
  })

  it('that a patient\'s text was not delivered sends it by e-mail, once', async () => {
    await addDueTexts(database.db, 1, now)
    await database.db.update(messages).set({ state: 'sent', providerId: 'SM9', personId: null, patientId: ids.patient, recipientKey: `patient:${ids.patient}` })
    for (let time = 0; time < 2; time++) await recordReceipt(ctx(), { providerId: 'SM9', status: 'undelivered', marker: null })
    const rows = await database.db.select().from(messages)
    expect(rows.map(row => `${row.channel} ${row.state}`).sort()).toEqual(['email queued', 'text failed'])
  })
})

describe('the patient\'s link', () => {
  it('opens with the birth date and answers the visit', async () => {
    const token = await link()
    const { linkId } = await openLink(ctx(), { token, birthDate: '1955-02-03' })
    await answerVisit(ctx(), { token, linkId, visitId: ids.visit, answer: 'cannot-come' })
    const [visit] = await database.db.select().from(visits)
    expect([visit?.state, visit?.cannotComeAt]).toEqual(['booked', now])
    expect((await database.db.select().from(inboundTexts)).map(row => row.meaning)).toEqual(['cannot-come'])
  })

  it('answers a guessed link, a wrong date, an old link and a locked link alike', async () => {
    const token = await link()
    const refusal = (given: string, birthDate: string, at = now) => openLink({ db: database.db, now: at }, { token: given, birthDate }).then(() => 'opened', (error: Error) => error.message)
    const old = new Date(now.getTime() + 61 * 86_400_000)
    const answers = [await refusal('guessed-guessed-guessed', '1955-02-03'), await refusal(token, '1955-02-03', old), ...await Promise.all([1, 2, 3, 4, 5].map(() => refusal(token, '1900-01-01'))), await refusal(token, '1955-02-03')]
    expect(new Set(answers).size).toBe(1)
    expect(answers[0]).toContain('cannot open')
    const [row] = await database.db.select().from(patientLinks)
    expect(row?.lockedUntil).not.toBeNull()
  })

  it('raises an escalation for a red symptom and leaves the visit booked', async () => {
    const token = await link()
    const { linkId } = await openLink(ctx(), { token, birthDate: '1955-02-03' })
    expect(await answerSymptoms(ctx(), { token, linkId, symptoms: ['sight-worse'], words: '' })).toEqual({ route: 'now' })
    const [raised] = await database.db.select().from(escalations).where(eq(escalations.pathwayId, ids.pathway))
    expect(raised?.urgency).toBe('now')
    expect((await database.db.select().from(visits)).map(visit => visit.state)).toEqual(['booked'])
  })

  it('refuses an answer without the cookie of this very link', async () => {
    const token = await link()
    await expect(answerSymptoms(ctx(), { token, linkId: undefined, symptoms: ['injury'], words: '' })).rejects.toMatchObject({ code: 'messaging.expired' })
    expect(await database.db.select().from(escalations)).toHaveLength(0)
  })
})

describe('free words on the page', () => {
  const tell = async (token: string, linkId: string, words: string, symptoms: Parameters<typeof answerSymptoms>[1]['symptoms'] = []) => answerSymptoms(ctx(), { token, linkId, symptoms, words })
  const opened = async () => {
    const token = await link()
    return { token, ...await openLink(ctx(), { token, birthDate: '1955-02-03' }) }
  }

  it('reach the nurse\'s list, and raise what a worried text raises', async () => {
    const { token, linkId } = await opened()
    expect(await tell(token, linkId, 'May I wash my hair?')).toEqual({ route: 'nurse' })
    expect((await database.db.select().from(inboundTexts)).map(row => [row.body, row.handledAt])).toEqual([['On their page: May I wash my hair?', null]])
    expect(await database.db.select().from(escalations)).toHaveLength(0)
    expect(await tell(token, linkId, 'It hurts terribly')).toEqual({ route: 'now' })
    expect((await database.db.select().from(escalations)).map(row => row.urgency)).toEqual(['now'])
  })

  it('said after an urgent answer never take it away', async () => {
    const { token, linkId } = await opened()
    await tell(token, linkId, '', ['curtain'])
    await tell(token, linkId, 'Since this morning.')
    const shown = presentLinkPage(await unscopedLoadLink(database.db, { token, linkId, now }), 'pl', now)
    expect([shown.page?.toldUs?.route, shown.page?.toldUs?.words]).toEqual(['now', ['Zasłona lub cień w części pola widzenia', 'Since this morning.']])
    expect(shown.page?.expected).toBe('Wizyta: piątek, 16 października, godz. 11:00.')
  })

  it('every link shows the same before it is opened, in the language asked for', async () => {
    const token = await link()
    const guessed = presentLinkPage(await unscopedLoadLink(database.db, { token: 'guessed-guessed-guessed', linkId: undefined, now }), 'ur', now)
    expect(presentLinkPage(await unscopedLoadLink(database.db, { token, linkId: undefined, now }), 'ur', now)).toEqual(guessed)
    expect([guessed.opened, guessed.direction, guessed.page]).toEqual([false, 'rtl', undefined])
  })
})
