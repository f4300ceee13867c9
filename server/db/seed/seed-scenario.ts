import type { Transaction } from '#server/db/client'
import { biometries, clinicSessions, consents, lensPlans, operationNotes, pathwayEvents, pathways, patients, referrals, riskAssessments, sessionPlaces, theatreCases, theatreLists, visits } from '#server/db/schema/index'
import { demoNames } from '#server/db/seed/demo-names'
import { seedMorning } from '#server/db/seed/seed-morning'
import { seedReviewed } from '#server/db/seed/seed-reviewed'
import { seedTheatre } from '#server/db/seed/seed-theatre'
import { lateList } from '#server/db/seed/seed-times'
import type { ScenarioTimes } from '#server/db/seed/seed-times'
import { seedId } from '#server/db/seed/seed-id'
import type { Stage } from '#shared/domain/pathway/vocabulary'
import { stages } from '#shared/domain/pathway/vocabulary'
import { dayOneNeed } from '#shared/domain/visit/day-one-need'

const dayMs = 86_400_000
const minuteMs = 60_000
const surgeon = seedId('person:tobias.quillfeather@example.org')
const lateSurgeon = seedId('person:ada.renshawe@example.org')
const optometrist = seedId('person:ivo.hartnell@example.org')
const nurse = seedId('person:maren.oxlade@example.org')
/** From here on, yesterday's late list: operated after the booking desk had closed, and so still to be booked. */
const firstLate = 55
const isToBook = (index: number) => index === 10 || index === 11 || (index >= firstLate && index < 100)
const ferncombe = seedId('site:ferncombe')
const tidemill = seedId('site:tidemill')

/** About sixty eyes over every stage round the start day: yesterday's list with its checks this morning, and what came before and after. */
export async function seedScenario(tx: Transaction, times: ScenarioTimes): Promise<void> {
  await seedSessions(tx, times)
  const at = (day: number, hour: number, minute = 0) => new Date(times.today.getTime() + day * dayMs + (hour * 60 + minute) * minuteMs)
  const list = seedId('list:yesterday')
  await tx.insert(theatreLists).values({ id: list, siteId: ferncombe, surgeonId: surgeon, room: 'Theatre 1', startsAt: at(-1, 8, 30), endsAt: at(-1, 17) })
  await tx.insert(theatreLists).values({ id: seedId('list:late'), siteId: ferncombe, surgeonId: lateSurgeon, room: 'Theatre 2', startsAt: at(-1, 13), endsAt: at(-1, 19) })
  await tx.insert(theatreLists).values({ id: seedId('list:today'), siteId: ferncombe, surgeonId: surgeon, room: 'Theatre 1', startsAt: at(0, 8, 30), endsAt: at(0, 17) })
  for (const [index, name] of demoNames.entries()) await seedPerson(tx, times, at, index >= firstLate ? seedId('list:late') : list, index, name)
  await seedTheatre(tx, times)
  await seedMorning(tx, times)
}

async function seedSessions(tx: Transaction, times: ScenarioTimes): Promise<void> {
  const kinds = [['ferncombe', 'day-one', 8.5, 18, 'Room 1'], ['ferncombe', 'follow-up', 13, 12, 'Room 1'], ['tidemill', 'day-one', 10, 6, 'Room A'], ['tidemill', 'follow-up', 14, 8, 'Room A']] as const
  for (let day = -45; day < 45; day++) {
    for (const [site, kind, hour, places, room] of kinds) {
      // Today's rooms at Ferncombe lie round the moment of seeding: seedMorning makes them.
      if ((day < 0 && site === 'tidemill') || (day === 0 && site === 'ferncombe')) continue
      const startsAt = new Date(times.today.getTime() + day * dayMs + hour * 60 * minuteMs)
      const sessionId = seedId(`session:${site}:${kind}:${day}`)
      await tx.insert(clinicSessions).values({ id: sessionId, siteId: seedId(`site:${site}`), kind, room, startsAt, endsAt: new Date(startsAt.getTime() + places * 10 * minuteMs) })
      await tx.insert(sessionPlaces).values(Array.from({ length: places }, (_, place) => ({ id: seedId(`place:${site}:${kind}:${day}:${place}`), sessionId, startsAt: new Date(startsAt.getTime() + place * 10 * minuteMs), minutes: 10 })))
    }
  }
}

/** What is particular about the people of the morning; everybody else is ordinary. */
const particulars: Record<number, { alerts?: { kind: 'allergy' | 'communication' | 'safety' | 'clinical', words: string }[], risk?: string[], dense?: boolean, transport?: boolean, complication?: string, preIop?: number, interpreter?: string, carer?: { name: string, phone: string } }> = {
  1: { alerts: [{ kind: 'clinical', words: 'Steroid raised pressure in 2021.' }], risk: ['steroid-response'], preIop: 20 },
  2: { alerts: [{ kind: 'safety', words: 'Lives alone.' }], carer: { name: 'Clemence Eckersfold, daughter', phone: '+447700900401' } },
  3: { alerts: [{ kind: 'clinical', words: 'Only seeing eye.' }], risk: ['only-eye'] },
  4: { alerts: [{ kind: 'communication', words: 'Hard of hearing: call from the front.' }] },
  5: { alerts: [{ kind: 'clinical', words: 'Takes glaucoma drops: check pressure first.' }], risk: ['glaucoma'], preIop: 19 },
  6: { dense: true, alerts: [{ kind: 'clinical', words: 'Very dense nucleus, long ultrasound.' }] },
  8: { complication: 'vitreous loss', alerts: [{ kind: 'clinical', words: 'Second eye. Vitreous loss in theatre.' }] },
  9: { transport: true, alerts: [{ kind: 'safety', words: 'Wheelchair: use room 2.' }] },
  57: { alerts: [{ kind: 'clinical', words: 'Only seeing eye.' }], risk: ['only-eye'] },
  58: { dense: true, transport: true, alerts: [{ kind: 'clinical', words: 'Very dense nucleus, long ultrasound.' }] },
  60: { interpreter: 'Polish' },
  62: { complication: 'capsule rupture', alerts: [{ kind: 'clinical', words: 'Capsule rupture, lens in the sulcus.' }] },
}

type At = (day: number, hour: number, minute?: number) => Date

async function seedPerson(tx: Transaction, times: ScenarioTimes, at: At, list: string, index: number, name: string): Promise<void> {
  const special = particulars[index] ?? {}
  const patientId = seedId(`patient:${index}`)
  const site = index === 11 || (index > 9 && index % 9 === 7) ? tidemill : ferncombe
  await tx.insert(patients).values({
    id: patientId, recordNumber: `FE${String(20_400 + index * 37)}`, name, birthDate: `19${38 + (index * 7) % 22}-${String(1 + (index * 5) % 12).padStart(2, '0')}-${String(1 + (index * 11) % 28).padStart(2, '0')}`,
    phone: `+447700900${String(200 + index)}`, email: `${name.toLowerCase().replace(/[^a-z]+/g, '.')}@example.org`, address: `${index + 1} Mill Lane, Ferncombe`, messageConsent: true, numberConfirmedAt: at(-20, 10),
    alerts: special.alerts ?? [], riskReasons: special.risk ?? [], needsTransport: special.transport ?? false, interpreterLanguage: special.interpreter ?? null, carer: special.carer ?? null, siteId: site, createdAt: at(-90, 9),
  })
  const stage: Stage = index < 10 ? 'day-one' : index < 12 ? 'surgery' : index < 19 ? 'follow-up' : index < 24 ? 'surgery' : index < 34 ? 'biometry' : index < 46 ? 'referral' : index < firstLate ? 'discharge' : 'surgery'
  const surgeryDay = index < 12 || index >= firstLate ? -1 : index < 19 ? -44 + (index - 12) * 6 : index < 21 ? 0 : index < 24 ? 3 + index : index >= 46 ? -60 : null
  await seedPathway(tx, times, at, { index, patientId, site, stage, surgeryDay, list, special, eye: index % 2 ? 'left' : 'right' })
  // Fellow eyes: the other eye of some has been through already.
  if (index % 11 === 4) await seedPathway(tx, times, at, { index: index + 100, patientId, site, stage: 'discharge', surgeryDay: -80 - index, list, special: {}, eye: index % 2 ? 'right' : 'left' })
}

interface SeedPathway { index: number, patientId: string, site: string, stage: Stage, surgeryDay: number | null, list: string, special: NonNullable<typeof particulars[number]>, eye: 'right' | 'left' }

async function seedPathway(tx: Transaction, times: ScenarioTimes, at: At, input: SeedPathway): Promise<void> {
  const { index, stage, surgeryDay, special } = input
  const id = seedId(`pathway:${index}`)
  const reached = (wanted: Stage) => stages.indexOf(stage) >= stages.indexOf(wanted)
  const operated = surgeryDay !== null && surgeryDay < 0
  const referredDay = (surgeryDay ?? 0) - 30 - (index * 7) % 60
  const operatedAt = !operated ? null : isToBook(index) ? lateList(times, (index % 10) * 22) : at(surgeryDay, 9 + (index % 7), 10)
  await tx.insert(pathways).values({
    id, patientId: input.patientId, eye: input.eye, siteId: input.site, surgeonId: input.list === seedId('list:late') ? lateSurgeon : surgeon, practiceId: index % 6 === 4 ? seedId('practice:harbour-lane') : null, stage, priority: index % 8 === 3 ? 'soon' : 'routine',
    referredAt: at(referredDay, 11), biometryAt: reached('biometry') ? at(referredDay + 14, 10) : null, surgeryAt: operatedAt ?? (surgeryDay === null ? null : at(surgeryDay, 9 + (index % 7), 10)), operatedAt,
    dayOneAt: reached('follow-up') && surgeryDay !== null ? at(surgeryDay + 1, 9) : null, followUpAt: stage === 'discharge' && surgeryDay !== null ? at(surgeryDay + 28, 14) : null, dischargedAt: stage === 'discharge' && surgeryDay !== null ? at(surgeryDay + 35, 10) : null,
    dayOneNeed: operatedAt ? firstCheck(special, operatedAt) : null, fellowEyeDecision: stage === 'discharge' ? 'Listed when the patient wishes' : null, stageSince: at(Math.min(0, referredDay + 14), 10),
  })
  await tx.insert(pathwayEvents).values({ id: seedId(`event:${index}`), pathwayId: id, at: at(referredDay, 11), kind: 'opened', toStage: 'referral', words: 'Referral received' })
  const triaged = reached('biometry')
  await tx.insert(referrals).values({ id: seedId(`referral:${index}`), pathwayId: id, referrer: 'Harbour Lane Opticians', referrerEmail: 'referrals@harbour-lane.example.org', reason: 'Blurred sight, glare when driving at night.', visionRight: '6/12', visionLeft: '6/18', redFlags: { suddenLoss: false, painOrRedness: false, flashesOrFloaters: false }, ...(triaged ? { triageDecision: 'accepted' as const, triagedBy: surgeon, triagedAt: at(referredDay + 3, 16) } : {}) })
  if (reached('surgery')) await seedBefore(tx, at, id, input, referredDay)
  if (operatedAt) await seedAfter(tx, times, at, id, input, operatedAt)
}

/** The site's own table decides the first check, as it does when an operation note is signed. */
function firstCheck(special: SeedPathway['special'], operatedAt: Date) {
  const risk = special.risk ?? []
  const need = dayOneNeed({
    operatedAt, complications: special.complication ? [special.complication] : [], woundConcern: false, oedemaAtEnd: false, viscoelasticLeft: false, complexOrCombined: false, denseNucleus: special.dense ?? false, ultrasoundTimesMedian: special.dense ? 7 : 1,
    glaucomaOrHypertension: risk.includes('glaucoma') || risk.includes('steroid-response'), preoperativeIopMmHg: special.preIop ?? 15, pseudoexfoliation: false, uveitis: false, onlyEye: risk.includes('only-eye'), opticNerveOrVein: false, endothelialCellsPerMm2: 2400,
    bothEyesSameDay: false, canReportSymptoms: true, canUseDrops: true, canReachEmergencyCare: true, needsTransport: special.transport ?? false, interpreterLanguage: special.interpreter ?? null,
  })
  return { ...need, inPerson: need.isRequired, latestSafeAt: need.latestSafeAt?.toISOString() ?? null }
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

async function seedAfter(tx: Transaction, times: ScenarioTimes, at: At, pathwayId: string, input: SeedPathway, operatedAt: Date): Promise<void> {
  const { index, special, patientId, stage } = input
  const caseId = seedId(`case:${index}`)
  await tx.insert(theatreCases).values({ id: caseId, listId: input.list, pathwayId, position: index + 1, plannedMinutes: special.dense ? 75 : 25, state: 'done' })
  await tx.insert(operationNotes).values({
    id: seedId(`note:${index}`), pathwayId, caseId, version: 1, operatedAt, anaesthesia: 'Topical', incision: '2.4 mm temporal', woundClockHour: input.eye === 'left' ? 3 : 9, capsulorhexisMm: 5.2, technique: special.dense ? 'Chop, slow and quiet' : 'Divide and conquer', viscoelastics: special.dense ? 'Dispersive, refilled twice' : 'Cohesive',
    energyPercentSeconds: special.dense ? 64 : 9, ultrasoundSeconds: special.dense ? 118 : 31, nuclearDensity: special.dense ? 'very dense' : 'moderate', complications: special.complication ? [special.complication] : [], lensModel: 'Monofocal, one piece', lensPowerD: 21.5, lensAsPlanned: true,
    drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 4, days: 28 }, { drug: 'Chloramphenicol 0.5 %', perDay: 4, days: 14 }], signedBy: input.list === seedId('list:late') ? lateSurgeon : surgeon, signedAt: new Date(operatedAt.getTime() + 20 * minuteMs),
  })
  // The morning's own visits are made with the morning.
  if (stage === 'surgery' || stage === 'day-one') return
  const seen = index === 18 ? 1 : stage === 'follow-up' ? 2 : 3
  await seedReviewed(tx, { index, pathwayId, patientId, siteId: ferncombe, isTidemill: input.site === tidemill, practiceId: index % 6 === 4 ? seedId('practice:harbour-lane') : null, operatedAt, today: times.today, dense: special.dense ?? false, visits: seen })
  if (index === 13 || index === 15) await tx.insert(visits).values({ id: seedId(`visit:final:${index}`), pathwayId, patientId, siteId: ferncombe, placeId: seedId(`place:ferncombe:follow-up:3:${index % 12}`), kind: 'final', state: 'booked', startsAt: at(3, 13, (index % 12) * 10), bookedBy: nurse, bookedAt: at(-1, 10) })
}
