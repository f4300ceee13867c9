import { eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { lensLabels, patients, pathways, riskAssessments, theatreCases, theatreLists } from '#server/db/schema/index'
import { aroundNow } from '#server/db/seed/seed-times'
import type { ScenarioTimes } from '#server/db/seed/seed-times'
import { seedId } from '#server/db/seed/seed-id'
import { withCheckDigit } from '#shared/domain/theatre/gs1'
import { assessRisk } from '#shared/domain/theatre/risk'
import type { RiskFactors } from '#shared/domain/theatre/vocabulary'

const surgeon = seedId('person:tobias.quillfeather@example.org')
const minuteMs = 60_000

/** What was found of the eyes on today's list; the others are ordinary. */
const usual: RiskFactors = { sex: 'female', ageYears: 74, glaucoma: false, diabeticRetinopathy: false, cataract: 'usual', locs: { opalescence: 2.8, colour: 2.6 }, noFundalView: false, pseudoexfoliation: false, weakZonules: false, pupil: 'large', axialLengthMm: 23.4, alphaBlocker: 'none', canLieFlat: true, anteriorChamberDepthMm: 3.1, endothelialCellsPerMm2: 2500 }
const today: { index: number, factors: Partial<RiskFactors> }[] = [
  { index: 19, factors: {} }, { index: 20, factors: { cataract: 'brunescent', locs: { opalescence: 5.6, colour: 5.8 }, pupil: 'small' } }, { index: 21, factors: { pupil: 'small' } }, { index: 22, factors: { alphaBlocker: 'tamsulosin' } }, { index: 23, factors: { locs: { opalescence: 4.3, colour: 4.1 } } },
]

/** Today's list with its risks, the timed cases of yesterday from which durations are learnt, and the labels of the lenses on the shelf. */
export async function seedTheatre(tx: Transaction, times: ScenarioTimes): Promise<void> {
  await seedLabels(tx)
  const list = seedId('list:today')
  const { startsAt: begins, endsAt } = todaysHours(times)
  const startsAt = begins.getTime()
  await tx.update(theatreLists).set({ startsAt: begins, endsAt }).where(eq(theatreLists.id, list))
  let minute = 0
  for (const [place, { index, factors }] of today.entries()) {
    const pathwayId = seedId(`pathway:${index}`)
    const [found] = await tx.select({ siteId: pathways.siteId }).from(pathways).innerJoin(patients, eq(patients.id, pathways.patientId)).where(eq(pathways.id, pathwayId))
    if (found?.siteId !== seedId('site:ferncombe')) continue
    const known = { ...usual, ...factors }
    const result = assessRisk(known)
    await tx.insert(riskAssessments).values({ id: seedId(`risk-theatre:${index}`), pathwayId, version: 2, factors: { ...known }, result: { ...result }, assessedBy: surgeon, assessedAt: new Date(times.today.getTime() - 3 * 24 * 60 * minuteMs) })
    const plannedMinutes = result.difficulty === 'dense' ? 85 : result.difficulty === 'firm' ? 35 : result.timeFactor > 1 ? 30 : 25
    await tx.insert(theatreCases).values({ id: seedId(`case:${index}`), listId: list, pathwayId, position: place + 1, plannedMinutes, constraints: index === 22 ? { diabetic: true } : {} })
    await tx.update(pathways).set({ surgeryAt: new Date(startsAt + minute * minuteMs) }).where(eq(pathways.id, pathwayId))
    minute += plannedMinutes + 10
  }
  await seedTimes(tx, times)
}

/** Today's list begins shortly after the moment of seeding, so that there is a day to come; where too little of the day is left, it keeps its usual hours. */
function todaysHours(times: ScenarioTimes): { startsAt: Date, endsAt: Date } {
  const [startsAt, endsAt] = [aroundNow(times, 20), aroundNow(times, 20 + 255)]
  if (endsAt.getTime() - startsAt.getTime() >= 120 * minuteMs) return { startsAt, endsAt }
  return { startsAt: new Date(times.today.getTime() + 8.5 * 60 * minuteMs), endsAt: new Date(times.today.getTime() + 17 * 60 * minuteMs) }
}

/** Yesterday's cases took their time: 19 to 27 minutes, the dense one 71. */
async function seedTimes(tx: Transaction, times: ScenarioTimes): Promise<void> {
  const list = seedId('list:yesterday')
  const [found] = await tx.select({ startsAt: theatreLists.startsAt }).from(theatreLists).where(eq(theatreLists.id, list))
  let minute = 0
  for (let index = 0; index < 12; index++) {
    const dense = index === 6
    const took = dense ? 71 : 19 + (index * 5) % 9
    const startedAt = new Date((found?.startsAt ?? times.today).getTime() + minute * minuteMs)
    await tx.update(theatreCases).set({ startedAt, endedAt: new Date(startedAt.getTime() + took * minuteMs) }).where(eq(theatreCases.id, seedId(`case:${index}`)))
    if (dense) {
      const known: RiskFactors = { ...usual, cataract: 'brunescent', locs: { opalescence: 5.4, colour: 5.6 } }
      await tx.insert(riskAssessments).values({ id: seedId(`risk-theatre:${index}`), pathwayId: seedId(`pathway:${index}`), version: 2, factors: { ...known }, result: { ...assessRisk(known) }, assessedBy: surgeon, assessedAt: new Date(times.today.getTime() - 3 * 24 * 60 * minuteMs) })
    }
    minute += took + 10
  }
}

/** One number for each power of the demo's lens. GS1 prefixes from 200 on are left for use inside a company, so that they name nobody's goods. */
async function seedLabels(tx: Transaction): Promise<void> {
  const powers = Array.from({ length: 49 }, (_, step) => 6 + step / 2)
  await tx.insert(lensLabels).values(powers.map(powerD => ({ gtin: withCheckDigit(`0200000${String(Math.round(powerD * 10)).padStart(6, '0')}`), model: 'Monofocal, one piece', powerD })))
}
