import { and, desc, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { biometries, operationNotes, riskAssessments } from '#server/db/schema/index'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import type { SignNoteBody } from '#shared/contracts/theatre'
import { dayOneNeed, otherwiseChoices } from '#shared/domain/visit/day-one-need'

/** What the record itself says, where the surgeon did not answer. Only a "yes" is taken from it: a record that is silent says nothing. */
const saidBy = (reasons: string[], ...wanted: string[]) => wanted.some(each => reasons.includes(each)) || undefined

/**
 * Whether this eye's day-one check must be in person, by the site's table. `inPerson` is what the booking desk asks; what nobody
 * recorded counts as required.
 */
export async function needDayOne(tx: Transaction, { pathway, patient, site }: LoadedPathway, note: SignNoteBody, surgeonId: string) {
  const [[risk], [biometry], routine] = await Promise.all([
    tx.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, pathway.id)).orderBy(desc(riskAssessments.version)).limit(1),
    tx.select().from(biometries).where(eq(biometries.pathwayId, pathway.id)).orderBy(desc(biometries.version)).limit(1),
    tx.select({ energy: operationNotes.energyPercentSeconds }).from(operationNotes).where(and(eq(operationNotes.signedBy, surgeonId))).orderBy(desc(operationNotes.signedAt)).limit(100),
  ])
  const { dayOne } = note
  const median = medianOf(routine.flatMap(row => row.energy === null ? [] : [row.energy]))
  const dense = risk?.result.difficulty === 'dense' ? true : risk?.result.difficulty === 'routine' || risk?.result.difficulty === 'firm' ? false : undefined
  const need = dayOneNeed({
    operatedAt: new Date(note.operatedAt), complications: note.complications, ...dayOne,
    denseNucleus: dense,
    ultrasoundTimesMedian: note.energyPercentSeconds !== undefined && median ? note.energyPercentSeconds / median : undefined,
    pseudoexfoliation: dayOne.pseudoexfoliation ?? (typeof risk?.factors.pseudoexfoliation === 'boolean' ? risk.factors.pseudoexfoliation : undefined),
    glaucomaOrHypertension: saidBy(patient.riskReasons, 'glaucoma', 'ocular-hypertension', 'steroid-response') ?? dayOne.glaucomaOrHypertension,
    onlyEye: saidBy(patient.riskReasons, 'only-eye') ?? dayOne.onlyEye,
    opticNerveOrVein: saidBy(patient.riskReasons, 'disc-damage', 'optic-neuropathy', 'vein-occlusion') ?? dayOne.opticNerveOrVein,
    preoperativeIopMmHg: biometry?.preoperativeIopMmHg ?? undefined, endothelialCellsPerMm2: biometry?.endothelialCellsPerMm2 ?? undefined,
    needsTransport: patient.needsTransport, interpreterLanguage: patient.interpreterLanguage,
  }, otherwiseChoices.find(each => each === site.settings.dayOneOtherwise))
  return { ...need, inPerson: need.isRequired, latestSafeAt: need.latestSafeAt?.toISOString() ?? null }
}

/** Median of the surgeon's own notes; too few say nothing. */
function medianOf(values: number[]): number | undefined {
  if (values.length < 5) return undefined
  const sorted = [...values].sort((left, right) => left - right)
  const middle = Math.floor(sorted.length / 2)
  return sorted.length % 2 ? sorted[middle] : ((sorted[middle - 1] ?? 0) + (sorted[middle] ?? 0)) / 2
}
