import { and, eq, ne } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { escalationActions, escalations, inboundTexts, messages, patients, people, roles, shifts, visits } from '#server/db/schema/index'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { climbRungs } from '#server/services/escalation/climb-rungs'
import { handleReply } from '#server/services/messaging/handle-reply'
import { listReplies } from '#server/services/messaging/list-replies'
import { receiveText } from '#server/services/messaging/receive-text'
import { addPatient, ids, openMessagingDatabase } from '#tests/factories/messaging'
import type { StoredKind } from '#shared/domain/messaging/vocabulary'

const now = new Date('2026-10-15T10:00:00Z')
const patientNumber = '+447700900377'
const surgeonNumber = '+447700900655'
let database: Awaited<ReturnType<typeof openMessagingDatabase>>
const ctx = () => ({ db: database.db, now })
const surgeon = () => ({ ...ctx(), actor: { personId: ids.person, name: 'Tobias Quillfeather', roles: [{ role: 'surgeon' as const, siteId: ids.site, practiceId: null }] } })

beforeEach(async () => {
  database = await openMessagingDatabase()
  await addPatient(database.db, now)
  return () => database.close()
})

async function wasSent(kind: StoredKind, hoursAgo: number): Promise<void> {
  const at = new Date(now.getTime() - hoursAgo * 3_600_000)
  await database.db.insert(messages).values({ kind, recipientKey: `patient:${ids.patient}`, subjectKey: `test:${kind}`, occasion: `${hoursAgo} hours ago`, channel: 'text', patientId: ids.patient, pathwayId: ids.pathway, siteId: ids.site, toAddress: patientNumber, body: 'A text.', state: 'delivered', dueAt: at, expiresAt: now, sentAt: at, createdAt: at })
}
const theVisit = async () => (await database.db.select().from(visits))[0]

describe('a bare yes', () => {
  it('to a symptom check confirms no visit: somebody rings', async () => {
    await wasSent('visit.reminder', 30)
    await wasSent('safety.day3', 2)
    await receiveText(ctx(), { providerId: 'SM1', from: patientNumber, body: 'Yes' })
    expect((await theVisit())?.confirmedAt).toBeNull()
    expect((await database.db.select().from(escalations)).map(row => row.urgency)).toEqual(['now'])
  })

  it('to a reminder confirms the visit', async () => {
    await wasSent('safety.day3', 60)
    await wasSent('visit.reminder', 1)
    await receiveText(ctx(), { providerId: 'SM1', from: patientNumber, body: 'Yes' })
    expect((await theVisit())?.confirmedAt).toEqual(now)
    expect(await database.db.select().from(escalations)).toHaveLength(0)
  })

  it('is taken as the answer to the questions when both were asked within a day', async () => {
    await wasSent('safety.day3', 3)
    await wasSent('visit.reminder', 1)
    await receiveText(ctx(), { providerId: 'SM1', from: patientNumber, body: 'yes' })
    expect((await theVisit())?.confirmedAt).toBeNull()
  })
})

async function raised(): Promise<{ id: string, number: number }> {
  return database.db.transaction(tx => raiseEscalation(tx, { pathwayId: ids.pathway, raisedBy: null, now, reasons: [{ ruleId: 'hand.raised', ruleVersion: 1, urgency: 'now', sentence: 'Look.', source: 'test', findings: {} }] }))
}
const answers = async () => (await database.db.select().from(messages).where(eq(messages.kind, 'alert.answer'))).map(row => row.body)

describe('a surgeon answers an alert by text', () => {
  it('HAVE acknowledges it as that person, once, and says so', async () => {
    await raised()
    for (let time = 0; time < 2; time++) await receiveText(ctx(), { providerId: 'SM2', from: surgeonNumber, body: 'Have' })
    const [row] = await database.db.select().from(escalations)
    expect([row?.state, row?.acknowledgedBy, row?.nextRungAt]).toEqual(['acknowledged', ids.person, null])
    expect((await database.db.select().from(escalationActions).where(eq(escalationActions.kind, 'acknowledged'))).map(each => each.personId)).toEqual([ids.person])
    expect(await answers()).toEqual([expect.stringMatching(/^Escalation \d+ is yours\./)])
    expect((await database.db.select().from(inboundTexts)).map(each => [each.personId, each.meaning, each.handledAt])).toEqual([[ids.person, 'have', now]])
  })

  it('ON hands it to the next rung at once', async () => {
    const other = '11111111-1111-4111-8111-111111111111'
    await database.db.insert(people).values({ id: other, name: 'Ada Renshawe', title: 'Surgeon', email: 'a.renshawe@example.org', phone: '+447700900656' })
    await database.db.insert(shifts).values({ siteId: ids.site, rung: 2, personId: other, startsAt: new Date(now.getTime() - 1000), endsAt: new Date(now.getTime() + 3_600_000) })
    await raised()
    await receiveText(ctx(), { providerId: 'SM2', from: surgeonNumber, body: 'ON' })
    await climbRungs(ctx())
    const told = await database.db.select().from(messages).where(and(eq(messages.personId, other), eq(messages.channel, 'text')))
    expect(told.map(row => row.kind)).toEqual(['alert.rung'])
    expect((await database.db.select().from(escalations)).map(row => row.state)).toEqual(['open'])
  })

  it('acknowledges none when two wait, until the number says which', async () => {
    const first = await raised()
    const patient = '22222222-2222-4222-8222-222222222222'
    const pathway = '33333333-3333-4333-8333-333333333333'
    await database.db.execute(`insert into patients (id, record_number, name, birth_date, site_id, created_at) values ('${patient}', 'F-2', 'Gilda Marlowe', '1950-01-01', '${ids.site}', now())`)
    await database.db.execute(`insert into pathways (id, patient_id, eye, site_id, surgeon_id, referred_at, stage_since) values ('${pathway}', '${patient}', 'left', '${ids.site}', '${ids.person}', now(), now())`)
    const second = await database.db.transaction(tx => raiseEscalation(tx, { pathwayId: pathway, raisedBy: null, now, reasons: [{ ruleId: 'hand.raised', ruleVersion: 1, urgency: 'today', sentence: 'Look.', source: 'test', findings: {} }] }))
    await receiveText(ctx(), { providerId: 'SM2', from: surgeonNumber, body: 'HAVE' })
    expect((await database.db.select().from(escalations)).map(row => row.state)).toEqual(['open', 'open'])
    expect(await answers()).toEqual([expect.stringContaining(`HAVE ${first.number}`)])
    await receiveText(ctx(), { providerId: 'SM3', from: surgeonNumber, body: `have ${second.number}` })
    expect((await database.db.select().from(escalations).where(ne(escalations.state, 'open'))).map(row => row.id)).toEqual([second.id])
  })

  it('says who has it when somebody else was first', async () => {
    const other = '11111111-1111-4111-8111-111111111111'
    await database.db.insert(people).values({ id: other, name: 'Ada Renshawe', title: 'Surgeon', email: 'a.renshawe@example.org' })
    const { id } = await raised()
    await database.db.update(escalations).set({ state: 'acknowledged', acknowledgedBy: other, acknowledgedAt: now }).where(eq(escalations.id, id))
    await receiveText(ctx(), { providerId: 'SM2', from: surgeonNumber, body: 'HAVE' })
    expect(await answers()).toEqual([expect.stringContaining('Ada Renshawe has it')])
    expect((await database.db.select().from(escalations))[0]?.acknowledgedBy).toBe(other)
  })

  it('keeps other words with the escalation, and a disabled account answers nothing', async () => {
    await raised()
    await receiveText(ctx(), { providerId: 'SM2', from: surgeonNumber, body: 'In theatre until four' })
    expect((await database.db.select().from(escalationActions).where(eq(escalationActions.kind, 'recorded'))).map(row => row.words)).toEqual(['By text: In theatre until four'])
    await database.db.update(people).set({ disabledAt: now })
    await receiveText(ctx(), { providerId: 'SM3', from: surgeonNumber, body: 'HAVE' })
    expect((await database.db.select().from(escalations))[0]?.state).toBe('open')
  })

  it('a person without a surgeon\'s role acknowledges nothing and is told so', async () => {
    await raised()
    await database.db.update(roles).set({ role: 'nurse' })
    await receiveText(ctx(), { providerId: 'SM2', from: surgeonNumber, body: 'HAVE' })
    expect((await database.db.select().from(escalations))[0]?.state).toBe('open')
    expect(await answers()).toEqual([expect.stringContaining('Open')])
  })
})

describe('a number that says nothing about who it is', () => {
  const list = async () => (await listReplies(surgeon(), { limit: 50 })).replies.map(({ reply }) => [reply.body, reply.patientId])

  it('unknown lands on the list and is settled there', async () => {
    await receiveText(ctx(), { providerId: 'SM4', from: '+447700900999', body: 'Who is this?' })
    expect(await list()).toEqual([['Who is this?', null]])
    const [row] = await database.db.select().from(inboundTexts)
    await handleReply(surgeon(), { id: row?.id ?? '', words: 'Rang back.' })
    expect(await list()).toEqual([])
  })

  it('shared by two patients lands on the list of their unit and confirms nobody\'s visit', async () => {
    await database.db.execute(`insert into patients (id, record_number, name, birth_date, phone, site_id, created_at) values (gen_random_uuid(), 'F-2', 'Gilda Marlowe', '1950-01-01', '${patientNumber}', '${ids.site}', now())`)
    await receiveText(ctx(), { providerId: 'SM4', from: patientNumber, body: 'Yes' })
    expect(await list()).toEqual([['Yes', null]])
    expect((await database.db.select().from(inboundTexts))[0]?.siteId).toBe(ids.site)
    expect((await theVisit())?.confirmedAt).toBeNull()
  })

  it('of a patient who died is read by a person and answered by nobody else', async () => {
    await database.db.update(patients).set({ diedOn: '2026-10-14' })
    await receiveText(ctx(), { providerId: 'SM4', from: patientNumber, body: 'Yes' })
    expect(await list()).toEqual([['Yes', ids.patient]])
    expect(await database.db.select().from(messages)).toHaveLength(0)
  })
})

describe('STOP', () => {
  async function queued(kind: StoredKind): Promise<void> {
    await database.db.insert(messages).values({ kind, recipientKey: `patient:${ids.patient}`, subjectKey: 'visit:1', occasion: '1 day before', channel: 'text', patientId: ids.patient, pathwayId: ids.pathway, siteId: ids.site, toAddress: patientNumber, body: 'Your visit.', dueAt: new Date(now.getTime() + 3_600_000), expiresAt: new Date(now.getTime() + 7_200_000), createdAt: now })
  }

  it('turns what was still to come into e-mail', async () => {
    await queued('visit.reminder')
    await receiveText(ctx(), { providerId: 'SM5', from: patientNumber, body: 'STOP' })
    expect((await database.db.select().from(messages).where(eq(messages.kind, 'visit.reminder'))).map(row => `${row.channel} ${row.state}`).sort()).toEqual(['email queued', 'text withdrawn'])
  })

  it('becomes a task for a person when there is no e-mail address', async () => {
    await database.db.update(patients).set({ email: null })
    await queued('visit.reminder')
    await receiveText(ctx(), { providerId: 'SM5', from: patientNumber, body: 'STOP' })
    expect((await database.db.select().from(messages).where(eq(messages.kind, 'visit.reminder'))).map(row => `${row.state} ${row.lastError}`)).toEqual(['held stopped texts, no e-mail address'])
    expect((await listReplies(surgeon(), { limit: 50 })).stuck).toHaveLength(1)
  })
})
