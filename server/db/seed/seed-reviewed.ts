import type { Transaction } from '#server/db/client'
import { visits } from '#server/db/schema/index'
import { asPerson, quietEye } from '#server/db/seed/seed-cast'
import { seedId } from '#server/db/seed/seed-id'
import { signReview } from '#server/services/review/sign-review'
import type { ReviewFindings, VisitKind } from '#shared/domain/review/vocabulary'

const dayMs = 86_400_000
const minuteMs = 60_000
const nurse = seedId('person:maren.oxlade@example.org')

export interface ReviewedEye { index: number, pathwayId: string, patientId: string, siteId: string, practiceId: string | null, operatedAt: Date, today: Date, dense: boolean, isTidemill: boolean, /** How many of the three visits lie behind. */ visits: number }

/** How an eye heals, by kind of visit: days after surgery and what is found. Plausible courses, from memory; no rule fires on them. */
const course: readonly { kind: Exclude<VisitKind, 'unplanned'>, day: number, found: (index: number, dense: boolean) => ReviewFindings }[] = [
  { kind: 'day-one', day: 1, found: (index, dense) => ({ ...quietEye, painScore: index % 3, acuityUnaided: index % 2 ? { logMar: 0.18, entered: '6/9' } : { logMar: 0.3, entered: '6/12' }, iopMmHg: 13 + index % 7, oedemaGrade: dense || index % 5 === 0 ? 1 : 0, cells: index % 4 ? '1+' : '2+' }) },
  { kind: 'first-week', day: 7, found: index => ({ ...quietEye, painScore: 0, acuityUnaided: { logMar: 0.1, entered: '6/7.5' }, iopMmHg: 12 + index % 6, cells: '0.5+', flare: '0' }) },
  { kind: 'final', day: 32, found: index => ({ ...quietEye, painScore: 0, acuityUnaided: { logMar: 0.1, entered: '6/7.5' }, acuityPinhole: { logMar: 0, entered: '6/6' }, iopMmHg: 12 + index % 5, cells: '0', flare: '0', dropsUse: 'finished', ...refraction(index) }) },
]

/** Final refraction in quarter dioptres round the prediction: most within half a dioptre, one at three quarters. */
function refraction(index: number): Pick<ReviewFindings, 'refractionSphereD' | 'refractionCylinderD' | 'refractionAxisDegrees'> {
  const spheres = [0, -0.25, 0.25, 0, -0.5, 0.25, 0, -0.25, 0.75, 0]
  return { refractionSphereD: spheres[index % spheres.length], refractionCylinderD: -0.25 * (1 + index % 4), refractionAxisDegrees: (index * 37) % 180 }
}

/** The visits of an eye that lie behind, each signed at its own time through the service that signs everybody's. */
export async function seedReviewed(tx: Transaction, eye: ReviewedEye): Promise<void> {
  for (const { kind, day, found } of course.slice(0, eye.visits)) {
    const startsAt = new Date(Math.floor(eye.operatedAt.getTime() / dayMs) * dayMs + day * dayMs + (kind === 'day-one' ? 8.5 * 60 : 13 * 60) * minuteMs + (eye.index % 12) * 10 * minuteMs)
    if (startsAt >= eye.today) break
    const visitId = seedId(`visit:${kind}:${eye.index}`)
    await tx.insert(visits).values({ id: visitId, pathwayId: eye.pathwayId, patientId: eye.patientId, siteId: eye.siteId, kind, startsAt, bookedBy: nurse, bookedAt: new Date(startsAt.getTime() - 18 * 60 * minuteMs), confirmedAt: new Date(startsAt.getTime() - 12 * 60 * minuteMs), arrivedAt: new Date(startsAt.getTime() - 5 * minuteMs), sentInAt: new Date(startsAt.getTime() + 3 * minuteMs) })
    // Eyes that are shared with a community practice have their later visits there.
    const who = eye.practiceId && kind !== 'day-one' ? 'petra.lanyon' as const : eye.isTidemill ? 'edmund.farrowby' as const : 'ivo.hartnell' as const
    await signReview(asPerson(tx, who, new Date(startsAt.getTime() + 12 * minuteMs)), { visitId, findings: found(eye.index, eye.dense), confirmedDoubts: [] })
  }
}
