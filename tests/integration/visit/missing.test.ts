import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { auditRows, escalations, messages, missingSteps, visits } from '#server/db/schema/index'
import { sweepMissing } from '#server/jobs/visit/sweep-missing'
import { addPatient, ids, openMessagingDatabase } from '#tests/factories/messaging'

const startsAt = new Date('2026-10-15T09:00:00Z')
const after = (minutes: number) => new Date(startsAt.getTime() + minutes * 60_000)
let database: Awaited<ReturnType<typeof openMessagingDatabase>>
const sweep = (minutes: number, db = database.db) => sweepMissing({ db, now: after(minutes) })
const state = async () => (await database.db.select().from(visits))[0]?.state

beforeEach(async () => {
  database = await openMessagingDatabase()
  await addPatient(database.db, new Date('2026-10-14T10:00:00Z'))
  await database.db.update(visits).set({ startsAt })
  return () => database.close()
})

describe('a patient who does not come', () => {
  it('is awaited for nineteen minutes and missing at twenty', async () => {
    expect(await sweep(19)).toBe(0)
    expect(await state()).toBe('booked')
    expect(await sweep(20)).toBe(1)
    expect(await state()).toBe('missing')
  })

  it('becomes missing once, however often and on however many machines the sweep runs', async () => {
    const others = [database.db, database.connect(), database.connect(), database.connect()]
    await Promise.all([...others, ...others].map(db => sweep(21, db)))
    await sweep(21)
    const rows = await database.db.select().from(auditRows).where(eq(auditRows.event, 'visit.missing'))
    expect(rows).toHaveLength(1)
    expect((await database.db.select().from(visits))[0]?.rowVersion).toBe(2)
  })

  it('gets one neutral text at 25 minutes, written down as a step', async () => {
    for (let time = 0; time < 3; time++) await sweep(26)
    const texts = (await database.db.select().from(messages)).filter(each => each.kind === 'missing.patient')
    expect(texts.map(each => each.channel)).toEqual(['text'])
    expect(texts[0]?.body).not.toMatch(/right eye|left eye|cataract|operation|surgery/i)
    expect((await database.db.select().from(missingSteps)).map(each => each.step)).toEqual(['text'])
  })

  it('whose steps nobody ends raises one escalation of urgency Today after an hour, and is not looked at again', async () => {
    await sweep(20)
    expect(await database.db.select().from(escalations)).toHaveLength(0)
    await Promise.all([sweep(60), sweep(60, database.connect())])
    expect(await sweep(90)).toBe(0)
    const raised = await database.db.select().from(escalations)
    expect(raised.map(each => [each.urgency, each.reasons.map(reason => reason.ruleId)])).toEqual([['today', ['visit.missing']]])
  })

  it('who is found by telephone is left alone', async () => {
    await sweep(20)
    await database.db.insert(missingSteps).values({ visitId: ids.visit, step: 'found', outcome: 'Stuck in traffic, comes at ten', at: after(24) })
    expect(await sweep(61)).toBe(0)
    expect(await database.db.select().from(escalations)).toHaveLength(0)
  })

  it('at a follow-up visit is missing too, and raises nothing by itself', async () => {
    await database.db.update(visits).set({ kind: 'first-week' })
    await sweep(70)
    expect(await state()).toBe('missing')
    expect(await database.db.select().from(escalations)).toHaveLength(0)
  })

  it('who arrived in time is not touched', async () => {
    await database.db.update(visits).set({ state: 'arrived', arrivedAt: after(5) })
    expect(await sweep(120)).toBe(0)
  })
})
