import type { Transaction } from '#server/db/client'
import { biometries, clinicSessions, consents, lensPlans, operationNotes, pathwayEvents, pathways, patients, referrals, reviews, riskAssessments, sessionPlaces, theatreCases, theatreLists, visits } from '#server/db/schema/index'
import { demoNames } from '#server/db/seed/demo-names'
import { seedTheatre } from '#server/db/seed/seed-theatre'
import { seedId } from '#server/db/seed/seed-id'
import type { Stage } from '#shared/domain/pathway/vocabulary'
import { stages } from '#shared/domain/pathway/vocabulary'

export interface ScenarioTimes { today: Date, now: Date }

const dayMs = 86_400_000
const minuteMs = 60_000
const surgeon = seedId('person:tobias.quillfeather@example.org')
const optometrist = seedId('person:ivo.hartnell@example.org')
const nurse = seedId('person:maren.oxlade@example.org')
const ferncombe = seedId('site:ferncombe')
const tidemill = seedId('site:tidemill')

/** About sixty eyes over every stage round the start day: yesterday's list with its checks this morning, and what came before and after. */
export async function seedScenario(tx: Transaction, times: ScenarioTimes): Promise<void> {
  await seedSessions(tx, times)
  const at = (day: number, hour: number, minute = 0) => new Date(times.today.getTime() + day * dayMs + (hour * 60 + minute) * minuteMs)
  const list = seedId('list:yesterday')
  await tx.insert(theatreLists).values({ id: list, siteId: ferncombe, surgeonId: surgeon, room: 'Theatre 1', startsAt: at(-1, 8, 30), endsAt: at(-1, 17) })
  await tx.insert(theatreLists).values({ id: seedId('list:today'), siteId: ferncombe, surgeonId: surgeon, room: 'Theatre 1', startsAt: at(0, 8, 30), endsAt: at(0, 17) })
  for (const [index, name] of demoNames.entries()) await seedPerson(tx, times, at, list, index, name)
  await seedTheatre(tx, times)
}

async function seedSessions(tx: Transaction, times: ScenarioTimes): Promise<void> {
  const kinds = [['ferncombe', 'day-one', 8.5, 18, 'Room 1'], ['ferncombe', 'follow-up', 13, 12, 'Room 1'], ['tidemill', 'day-one', 10, 6, 'Room A'], ['tidemill', 'follow-up', 14, 8, 'Room A']] as const
  for (let day = -45; day < 45; day++) {
    for (const [site, kind, hour, places, room] of kinds) {
      if (day < 0 && site === 'tidemill') continue
      const startsAt = new Date(times.today.getTime() + day * dayMs + hour * 60 * minuteMs)
      const sessionId = seedId(`session:${site}:${kind}:${day}`)
      await tx.insert(clinicSessions).values({ id: sessionId, siteId: seedId(`site:${site}`), kind, room, startsAt, endsAt: new Date(startsAt.getTime() + places * 10 * minuteMs) })
      await tx.insert(sessionPlaces).values(Array.from({ length: places }, (_, place) => ({ id: seedId(`place:${site}:${kind}:${day}:${place}`), sessionId, startsAt: new Date(startsAt.getTime() + place * 10 * minuteMs), minutes: 10 })))
    }
  }
}

/** What is particular about the people of the morning; everybody else is ordinary. */
const particulars: Record<number, { alerts?: { kind: 'allergy' | 'communication' | 'safety' | 'clinical', words: string }[], risk?: string[], dense?: boolean, transport?: boolean, complication?: string, preIop?: number }> = {
  1: { alerts: [{ kind: 'clinical', words: 'Steroid raised pressure in 2021.' }], risk: ['steroid-response'], preIop: 20 },
  2: { alerts: [{ kind: 'safety', words: 'Lives alone.' }] },
  3: { alerts: [{ kind: 'clinical', words: 'Only seeing eye.' }], risk: ['only-eye'] },
  4: { alerts: [{ kind: 'communication', words: 'Hard of hearing: call from the front.' }] },
  5: { alerts: [{ kind: 'clinical', words: 'Takes glaucoma drops: check pressure first.' }], risk: ['glaucoma'], preIop: 19 },
  6: { dense: true, alerts: [{ kind: 'clinical', words: 'Very dense nucleus, long ultrasound.' }] },
  8: { complication: 'vitreous loss', alerts: [{ kind: 'clinical', words: 'Second eye. Vitreous loss in theatre.' }] },
  9: { transport: true, alerts: [{ kind: 'safety', words: 'Wheelchair: use room 2.' }] },
}

type At = (day: number, hour: number, minute?: number) => Date

async function seedPerson(tx: Transaction, times: ScenarioTimes, at: At, list: string, index: number, name: string): Promise<void> {
  const special = particulars[index] ?? {}
  const patientId = seedId(`patient:${index}`)
  const site = index === 11 || index % 9 === 7 ? tidemill : ferncombe
  await tx.insert(patients).values({
    id: patientId, recordNumber: `FE${String(20_400 + index * 37)}`, name, birthDate: `19${38 + (index * 7) % 22}-${String(1 + (index * 5) % 12).padStart(2, '0')}-${String(1 + (index * 11) % 28).padStart(2, '0')}`,
    phone: `+447700900${String(200 + index)}`, email: `${name.toLowerCase().replace(/[^a-z]+/g, '.')}@example.org`, address: `${index + 1} Mill Lane, Ferncombe`, messageConsent: true, numberConfirmedAt: at(-20, 10),
    alerts: special.alerts ?? [], riskReasons: special.risk ?? [], needsTransport: special.transport ?? false, siteId: site, createdAt: at(-90, 9),
  })
  const stage: Stage = index < 10 ? 'day-one' : index < 12 ? 'surgery' : index < 19 ? 'follow-up' : index < 24 ? 'surgery' : index < 34 ? 'biometry' : index < 46 ? 'referral' : 'discharge'
  const surgeryDay = index < 12 ? -1 : index < 19 ? -44 + (index - 12) * 6 : index < 21 ? 0 : index < 24 ? 3 + index : index >= 46 ? -60 : null
  await seedPathway(tx, at, { index, patientId, site, stage, surgeryDay, list, special, eye: index % 2 ? 'left' : 'right' })
  // Fellow eyes: the other eye of some has been through already.
  if (index % 11 === 4) await seedPathway(tx, at, { index: index + 100, patientId, site, stage: 'discharge', surgeryDay: -80, list, special: {}, eye: index % 2 ? 'right' : 'left' })
}

interface SeedPathway { index: number, patientId: string, site: string, stage: Stage, surgeryDay: number | null, list: string, special: NonNullable<typeof particulars[number]>, eye: 'right' | 'left' }

async function seedPathway(tx: Transaction, at: At, input: SeedPathway): Promise<void> {
  const { index, stage, surgeryDay, special } = input
  const id = seedId(`pathway:${index}`)
  const reached = (wanted: Stage) => stages.indexOf(stage) >= stages.indexOf(wanted)
  const operated = surgeryDay !== null && surgeryDay < 0
  const referredDay = (surgeryDay ?? 0) - 30 - (index * 7) % 60
  const operatedAt = operated ? at(surgeryDay, 9 + (index % 7), 10) : null
  await tx.insert(pathways).values({
    id, patientId: input.patientId, eye: input.eye, siteId: input.site, surgeonId: surgeon, practiceId: index % 6 === 4 ? seedId('practice:harbour-lane') : null, stage, priority: index % 8 === 3 ? 'soon' : 'routine',
    referredAt: at(referredDay, 11), biometryAt: reached('biometry') ? at(referredDay + 14, 10) : null, surgeryAt: surgeryDay === null ? null : at(surgeryDay, 9 + (index % 7), 10), operatedAt,
    dayOneAt: reached('follow-up') && surgeryDay !== null ? at(surgeryDay + 1, 9) : null, followUpAt: stage === 'discharge' && surgeryDay !== null ? at(surgeryDay + 28, 14) : null, dischargedAt: stage === 'discharge' && surgeryDay !== null ? at(surgeryDay + 35, 10) : null,
    dayOneNeed: operated ? { inPerson: Boolean(special.dense || special.complication || special.risk?.length) } : null, fellowEyeDecision: stage === 'discharge' ? 'Listed when the patient wishes' : null, stageSince: at(Math.min(0, referredDay + 14), 10),
  })
  await tx.insert(pathwayEvents).values({ id: seedId(`event:${index}`), pathwayId: id, at: at(referredDay, 11), kind: 'opened', toStage: 'referral', words: 'Referral received' })
  const triaged = reached('biometry')
  await tx.insert(referrals).values({ id: seedId(`referral:${index}`), pathwayId: id, referrer: 'Harbour Lane Opticians', referrerEmail: 'referrals@harbour-lane.example.org', reason: 'Blurred sight, glare when driving at night.', visionRight: '6/12', visionLeft: '6/18', redFlags: { suddenLoss: false, painOrRedness: false, flashesOrFloaters: false }, ...(triaged ? { triageDecision: 'accepted' as const, triagedBy: surgeon, triagedAt: at(referredDay + 3, 16) } : {}) })
  if (reached('surgery')) await seedBefore(tx, at, id, input, referredDay)
  if (operated) await seedAfter(tx, at, id, input, operatedAt ?? at(-1, 9))
}

async function seedBefore(tx: Transaction, at: At, pathwayId: string, input: SeedPathway, referredDay: number): Promise<void> {
  const { index, special } = input
  const biometryId = seedId(`biometry:${index}`)
  await tx.insert(biometries).values({
    id: biometryId, pathwayId, version: 1, axialLengthMm: 22.4 + (index % 20) / 8, axialLengthSdMm: 0.01, k1D: 42.6 + (index % 8) / 4, k1AxisDegrees: 175, k2D: 43.2 + (index % 8) / 4, k2AxisDegrees: 85, anteriorChamberDepthMm: 3.1, lensThicknessMm: 4.5, whiteToWhiteMm: 11.9,
    cctUm: 545, preoperativeLogMar: 0.5, preoperativeAcuityEntered: '6/18', preoperativeIopMmHg: special.preIop ?? 15, measuredBy: optometrist, measuredAt: at(referredDay + 14, 10), acceptedBy: optometrist, acceptedAt: at(referredDay + 14, 10, 20),
  })
  await tx.insert(lensPlans).values({ id: seedId(`plan:${index}`), pathwayId, biometryId, version: 1, model: 'Monofocal, one piece', powerD: 21.5, targetD: -0.25, predictedD: -0.21, secondCheckAgrees: 'not-available', differenceExplained: 'Demo scenario: planned before the second check was kept here.', signedBy: surgeon, signedAt: at(referredDay + 20, 12) })
  await tx.insert(riskAssessments).values({ id: seedId(`risk:${index}`), pathwayId, version: 1, factors: { nucleus: special.dense ? 'very dense' : 'moderate' }, result: { note: 'Entered with the demo scenario.' }, assessedBy: surgeon, assessedAt: at(referredDay + 20, 12) })
  await tx.insert(consents).values({ id: seedId(`consent:${index}`), pathwayId, version: 1, discussed: 'Aim, other ways, risks of infection, bleeding, capsule rupture, and a second operation.', signedBy: surgeon, signedAt: at(referredDay + 20, 12, 10) })
}

async function seedAfter(tx: Transaction, at: At, pathwayId: string, input: SeedPathway, operatedAt: Date): Promise<void> {
  const { index, special, patientId, stage } = input
  const caseId = seedId(`case:${index}`)
  await tx.insert(theatreCases).values({ id: caseId, listId: input.list, pathwayId, position: index + 1, plannedMinutes: special.dense ? 75 : 25, state: 'done' })
  await tx.insert(operationNotes).values({
    id: seedId(`note:${index}`), pathwayId, caseId, version: 1, operatedAt, anaesthesia: 'Topical', incision: '2.4 mm temporal', woundClockHour: input.eye === 'left' ? 3 : 9, capsulorhexisMm: 5.2, technique: special.dense ? 'Chop, slow and quiet' : 'Divide and conquer', viscoelastics: special.dense ? 'Dispersive, refilled twice' : 'Cohesive',
    energyPercentSeconds: special.dense ? 64 : 9, ultrasoundSeconds: special.dense ? 118 : 31, nuclearDensity: special.dense ? 'very dense' : 'moderate', complications: special.complication ? [special.complication] : [], lensModel: 'Monofocal, one piece', lensPowerD: 21.5, lensAsPlanned: true,
    drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 4, days: 28 }, { drug: 'Chloramphenicol 0.5 %', perDay: 4, days: 14 }], signedBy: surgeon, signedAt: new Date(operatedAt.getTime() + 20 * minuteMs),
  })
  if (stage === 'surgery') return
  const day = Math.round((operatedAt.getTime() - at(0, 0).getTime() - 12 * 3_600_000) / dayMs) + 1
  const place = index % 18
  const visitId = seedId(`visit:${index}`)
  const startsAt = at(day, 8, 30 + place * 10)
  const placeId = index < 19 ? seedId(`place:ferncombe:day-one:${day}:${place}`) : null
  const past = stage !== 'day-one'
  await tx.insert(visits).values({ id: visitId, pathwayId, patientId, siteId: ferncombe, placeId, kind: 'day-one', state: past ? 'done' : 'booked', startsAt, bookedBy: nurse, bookedAt: operatedAt, ...(past ? { arrivedAt: startsAt, doneAt: startsAt } : {}), confirmedAt: index % 3 ? startsAt : null })
  if (past) await tx.insert(reviews).values({ id: seedId(`review:${index}`), visitId, pathwayId, version: 1, findings: { painScore: 1, acuityUnaided: { logMar: 0.18, entered: '6/9' }, iopMmHg: 15, iopMethod: 'applanation', oedemaGrade: 0, cells: '1+', flare: '1+', wound: 'sealed', seidel: 'negative', chamberDepth: 'deep', lensPosition: 'centred' }, reasons: [], rulesVersion: 'demo', bestLogMar: 0.18, iopMmHg: 15, oedemaGrade: 0, cells: '1+', signedBy: optometrist, signedAt: startsAt })
  if (stage === 'follow-up' && index % 3 === 0) await tx.insert(visits).values({ id: seedId(`visit-week:${index}`), pathwayId, patientId, siteId: ferncombe, placeId: seedId(`place:ferncombe:follow-up:3:${index % 12}`), kind: 'first-week', state: 'booked', startsAt: at(3, 13, (index % 12) * 10), bookedBy: nurse, bookedAt: at(-1, 10) })
}
