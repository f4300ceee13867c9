import { eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { clinicSessions, escalations, inboundTexts, messageEvents, messages, missingSteps, sessionPlaces, visits } from '#server/db/schema/index'
import { asPerson, quietEye } from '#server/db/seed/seed-cast'
import { seedId } from '#server/db/seed/seed-id'
import { aroundNow } from '#server/db/seed/seed-times'
import type { ScenarioTimes } from '#server/db/seed/seed-times'
import { answerEscalation } from '#server/services/escalation/answer-escalation'
import { raiseByHand } from '#server/services/escalation/raise-by-hand'
import { signReview } from '#server/services/review/sign-review'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'
import type { VisitState } from '#shared/domain/visit/vocabulary'

const minuteMs = 60_000
const ferncombe = seedId('site:ferncombe')
const nurse = seedId('person:maren.oxlade@example.org')
const optometrist = seedId('person:ivo.hartnell@example.org')

interface Seen { index: number, kind: 'day-one' | 'first-week' | 'final', place: string, minutes: number, state: VisitState, confirmed?: boolean, note?: string }

/** Today's clinic as it stands at the moment of seeding: three are signed, three are here, one is missing and the others are due. */
const cast: readonly Seen[] = [
  { index: 6, kind: 'day-one', place: 'one:0', minutes: -60, state: 'booked', confirmed: true },
  { index: 0, kind: 'day-one', place: 'one:1', minutes: -50, state: 'booked', confirmed: true },
  { index: 1, kind: 'day-one', place: 'one:2', minutes: -40, state: 'booked', confirmed: true },
  { index: 2, kind: 'day-one', place: 'one:3', minutes: -25, state: 'missing' },
  { index: 3, kind: 'day-one', place: 'one:4', minutes: -15, state: 'with-optometrist', confirmed: true },
  { index: 4, kind: 'day-one', place: 'one:5', minutes: -5, state: 'arrived', confirmed: true },
  { index: 5, kind: 'day-one', place: 'one:6', minutes: 5, state: 'arrived' },
  { index: 7, kind: 'day-one', place: 'one:7', minutes: 15, state: 'booked', confirmed: true },
  { index: 8, kind: 'day-one', place: 'one:8', minutes: 25, state: 'booked' },
  { index: 9, kind: 'day-one', place: 'one:10', minutes: 45, state: 'booked', confirmed: true, note: 'Transport brings her half an hour before.' },
  { index: 18, kind: 'first-week', place: 'three:1', minutes: 10, state: 'booked', confirmed: true },
  { index: 12, kind: 'final', place: 'three:3', minutes: 30, state: 'booked', confirmed: true },
]

/** Places of today by room, as minutes from the moment of seeding. Ten minutes each; two are closed. */
const rooms = [
  { name: 'one', room: 'Room 1', kind: 'day-one', minutes: [-60, -50, -40, -25, -15, -5, 5, 15, 25, 35, 45, 55, 65, 75, 85, 95], closed: [] },
  { name: 'two', room: 'Room 2', kind: 'day-one', minutes: [25, 35, 45, 55, 65, 75, 85, 95, 105, 115], closed: [8, 9] },
  { name: 'three', room: 'Room 3', kind: 'follow-up', minutes: [0, 10, 20, 30, 40, 50, 60, 70], closed: [] },
] as const

/** The seeded morning. Whatever is signed goes through the services, so that rule versions, reasons and clocks are true. */
export async function seedMorning(tx: Transaction, times: ScenarioTimes): Promise<void> {
  await seedRooms(tx, times)
  for (const seen of cast) await seedVisit(tx, times, seen)
  await tx.insert(missingSteps).values({ id: seedId('missing-step:2'), visitId: seedId('visit:day-one:2'), step: 'call', outcome: 'No answer', at: new Date(times.now.getTime() - 3 * minuteMs), personId: nurse })
  await seedSigned(tx, times)
  await seedEscalations(tx, times)
  await seedTexts(tx, times)
}

async function seedRooms(tx: Transaction, times: ScenarioTimes): Promise<void> {
  for (const { name, room, kind, minutes, closed } of rooms) {
    const sessionId = seedId(`session:today:${name}`)
    const starts = minutes.map(each => aroundNow(times, each))
    const last = starts.at(-1)
    if (!starts[0] || !last) continue
    await tx.insert(clinicSessions).values({ id: sessionId, siteId: ferncombe, kind, room, startsAt: starts[0], endsAt: new Date(last.getTime() + 10 * minuteMs) })
    await tx.insert(sessionPlaces).values(starts.map((startsAt, place) => ({ id: seedId(`place:today:${name}:${place}`), sessionId, startsAt, minutes: 10, closedAt: closed.some(each => each === place) ? aroundNow(times, -90) : null })))
  }
}

async function seedVisit(tx: Transaction, times: ScenarioTimes, seen: Seen): Promise<void> {
  const startsAt = aroundNow(times, seen.minutes)
  const after = (minutes: number) => new Date(Math.min(startsAt.getTime() + minutes * minuteMs, times.now.getTime() - 2 * minuteMs))
  const isHere = seen.state === 'arrived' || seen.state === 'with-optometrist'
  await tx.insert(visits).values({
    id: seedId(`visit:${seen.kind}:${seen.index}`), pathwayId: seedId(`pathway:${seen.index}`), patientId: seedId(`patient:${seen.index}`), siteId: ferncombe, placeId: seedId(`place:today:${seen.place}`), kind: seen.kind, state: seen.state, startsAt,
    bookedBy: nurse, bookedAt: new Date(times.now.getTime() - 18 * 60 * minuteMs), confirmedAt: seen.confirmed ? new Date(times.now.getTime() - 12 * 60 * minuteMs) : null, note: seen.note ?? '',
    arrivedAt: isHere ? after(-6) : null, missingAt: seen.state === 'missing' ? after(20) : null,
    ...(seen.state === 'with-optometrist' ? { sentInAt: after(4), optometristId: optometrist } : {}),
  })
}

async function sign(tx: Transaction, at: Date, visitId: string, findings: ReviewFindings): Promise<void> {
  await tx.update(visits).set({ arrivedAt: new Date(at.getTime() - 14 * minuteMs), sentInAt: new Date(at.getTime() - 9 * minuteMs), optometristId: optometrist }).where(eq(visits.id, visitId))
  await signReview(asPerson(tx, 'ivo.hartnell', at), { visitId, findings, confirmedDoubts: [] })
}

/** A very dense nucleus after long ultrasound with a clear cornea; a leaking wound; a pressure raised in an eye at risk. */
async function seedSigned(tx: Transaction, times: ScenarioTimes): Promise<void> {
  const ago = (minutes: number) => new Date(times.now.getTime() - minutes * minuteMs)
  await sign(tx, ago(47), seedId('visit:day-one:6'), { ...quietEye, acuityUnaided: { logMar: 0.3, entered: '6/12' }, iopMmHg: 17, oedemaGrade: 0, cctUm: 561, cells: '1+', flare: '1+', note: 'Clear cornea after long ultrasound for a very dense nucleus.' })
  await sign(tx, ago(29), seedId('visit:day-one:1'), { ...quietEye, acuityUnaided: { logMar: 0.4, entered: '6/15' }, iopMmHg: 34, oedemaGrade: 1, cells: '2+', note: 'Acetazolamide given. Pressure again in two hours.' })
  await sign(tx, ago(12), seedId('visit:day-one:0'), { ...quietEye, painScore: 2, acuityUnaided: { logMar: 0.6, entered: '6/24' }, iopMmHg: 9, oedemaGrade: 1, wound: 'leaking', seidel: 'spontaneous', woundClockHour: 10, cells: '2+', note: 'Waiting in room 2, shield on.' })
}

/** One leak open since a few minutes, floaters rung in and on the second rung, a pressure acknowledged, an oedema of days ago being watched, and two that are closed. */
async function seedEscalations(tx: Transaction, times: ScenarioTimes): Promise<void> {
  const ago = (minutes: number) => new Date(times.now.getTime() - minutes * minuteMs)
  await raiseByHand(asPerson(tx, 'maren.oxlade', ago(38)), { pathwayId: seedId('pathway:16'), urgency: 'today', words: 'Rang the unit: new floaters since yesterday, no pain, no curtain.' })
  await answer(tx, 1, 'tobias.quillfeather', ago(26), 'acknowledge', 'Pressure again at noon, drops changed by telephone.')
  const days = 24 * 60
  await raiseByHand(asPerson(tx, 'ivo.hartnell', ago(2 * days + 90)), { pathwayId: seedId('pathway:14'), urgency: 'this-week', words: 'Oedema 2 in the fifth week, clearing slowly. Asks for a surgeon’s opinion.' })
  await answer(tx, 14, 'ada.renshawe', ago(2 * days + 30), 'acknowledge', 'Cell count asked for, seen next week.')
  await answer(tx, 14, 'ada.renshawe', ago(days + 45), 'record', 'Cell count 1450 per square millimetre. Hypertonic drops begun.')
  for (const [index, day, words, done] of [[13, 37, 'Pressure 30 on the first day, no pain.', 'Drops given. 17 the next morning.'], [15, 25, 'Dropped the bottle: no drops for two days.', 'New bottle given, shown how to use it. Eye quiet.']] as const) {
    await raiseByHand(asPerson(tx, 'ivo.hartnell', ago(day * days + 60)), { pathwayId: seedId(`pathway:${index}`), urgency: 'today', words })
    await answer(tx, index, 'tobias.quillfeather', ago(day * days + 52), 'acknowledge', 'I am ringing the patient.')
    await answer(tx, index, 'tobias.quillfeather', ago(day * days + 10), 'close', done)
  }
  await alertsWentOut(tx)
}

/** These alerts went out before the demo began: the sender has nothing to catch up with. */
async function alertsWentOut(tx: Transaction): Promise<void> {
  await tx.update(escalations).set({ alertedAt: escalations.raisedAt })
  const sent = await tx.update(messages).set({ state: 'delivered', attempts: 1, sentAt: sql`${messages.dueAt} + interval '4 seconds'`, deliveredAt: sql`${messages.dueAt} + interval '9 seconds'` }).where(sql`${messages.escalationId} is not null and ${messages.state} = 'queued'`).returning({ id: messages.id, sentAt: messages.sentAt, deliveredAt: messages.deliveredAt })
  if (!sent.length) return
  await tx.insert(messageEvents).values(sent.flatMap(({ id, sentAt, deliveredAt }) => sentAt && deliveredAt ? [{ messageId: id, at: sentAt, kind: 'sent' }, { messageId: id, at: deliveredAt, kind: 'delivered' }] : []))
}

async function answer(tx: Transaction, index: number, who: 'tobias.quillfeather' | 'ada.renshawe', at: Date, kind: 'acknowledge' | 'record' | 'close', words: string): Promise<void> {
  await alertsWentOut(tx)
  const [row] = await tx.select({ id: escalations.id, rowVersion: escalations.rowVersion }).from(escalations).where(eq(escalations.pathwayId, seedId(`pathway:${index}`)))
  if (!row) throw new Error(`The seed expects an escalation of pathway ${index}.`)
  await answerEscalation(asPerson(tx, who, at), { id: row.id, answer: kind, words, rowVersion: row.rowVersion })
}

async function seedTexts(tx: Transaction, times: ScenarioTimes): Promise<void> {
  const texts = [
    { index: 7, minutes: 130, body: 'Yes. Is it all right that it waters?', meaning: 'confirm' },
    { index: 8, minutes: 95, body: 'Which entrance do I use with a wheelchair please', meaning: 'ambiguous' },
    { index: 9, minutes: 160, body: 'YES', meaning: 'confirm', handled: true },
  ]
  await tx.insert(inboundTexts).values(texts.map(({ index, minutes, body, meaning, handled }) => {
    const receivedAt = new Date(times.now.getTime() - minutes * minuteMs)
    return { id: seedId(`text:${index}`), providerId: `SMdemo${index}`, fromNumber: `+447700900${200 + index}`, patientId: seedId(`patient:${index}`), visitId: seedId(`visit:day-one:${index}`), siteId: ferncombe, body, meaning, receivedAt, ...(handled ? { handledBy: nurse, handledAt: receivedAt } : {}) }
  }))
}
