import type { FactorRow } from '#shared/domain/theatre/risk-model'
import type { Hazard, MinimumGrade, MissingFactor, RiskAssessment, RiskFactors, RiskShare } from '#shared/domain/theatre/vocabulary'
import { DomainError } from '#shared/domain/errors'
import { checkFactors } from '#shared/domain/theatre/check-factors'
import { asksInPerson, findHazards, stricterGrade } from '#shared/domain/theatre/hazards'
import { difficultyTimeFactors, kindContradictsGrade, nucleusDifficulty } from '#shared/domain/theatre/nuclear-density'
import { factorTable, publishedOverallProbability, publishedReferenceProbability, riskSource, surgeonOddsRatios } from '#shared/domain/theatre/risk-model'
import { hazardIds } from '#shared/domain/theatre/vocabulary'

/** A unit's own overall rate, 0 to 1 (both ends left out), to which the published odds are scaled. */
export interface Calibration { overallProbability: number }

/** From these probabilities on, who may operate. Proposed; a site signs its own. */
export const gradeSteps: readonly { from: number, grade: MinimumGrade }[] = [
  { from: 0.05, grade: 'consultant' },
  { from: 0.02, grade: 'experienced' },
  { from: 0, grade: 'any-supervised' },
]

interface Reading { row: FactorRow, oddsRatio: number, label: string, known: boolean }

/**
 * Chance of posterior capsule rupture or vitreous loss in this eye, and what its hazards ask for.
 *
 * A factor that is not recorded counts as present, at its worst, and is listed as missing: the figure is used to decide
 * who operates and who is seen the next morning, and for both an eye nobody looked at must not pass for an easy one.
 * `interval` gives the other end too. Time and equipment count only what is known: an unrecorded nucleus would
 * otherwise fill every list with triple slots. Who operates is no finding of the eye: absent means "for a consultant".
 *
 * The published ratios are multiplied as odds, never as probabilities. `calibration` scales the odds to the unit's own
 * overall rate (today's is about half of 2001-2006); that is arithmetic, not a published recalibration.
 *
 * @throws DomainError `theatre.factors-invalid`, `theatre.calibration-invalid`
 */
export function assessRisk(factors: RiskFactors, calibration?: Calibration): RiskAssessment {
  checkFactors(factors)
  const baselineOdds = oddsOf(publishedReferenceProbability) * calibrationRatio(calibration)
  const readings = readFactors(factors)
  const { present, missing: missingHazards } = findHazards(factors)
  const composite = product(readings.map(({ oddsRatio }) => oddsRatio))
  const probability = probabilityOf(baselineOdds * composite)
  const unknown = readings.filter(({ known }) => !known)
  const dayOneReasons = [
    ...present.filter(hazard => hazard.dayOneInPerson).map(hazard => hazard.label),
    ...missingHazards.filter(({ factor }) => hazardIds.some(id => id === factor && asksInPerson(id))).map(({ label }) => `Not recorded: ${label.toLowerCase()}`),
    ...(factors.glaucoma === undefined ? ['Not recorded: glaucoma'] : factors.glaucoma ? ['Glaucoma'] : []),
  ]
  return {
    probability,
    interval: unknown.length ? { low: probabilityOf(baselineOdds * withLeast(readings)), high: probability } : null,
    compositeOddsRatio: composite,
    baselineProbability: probabilityOf(baselineOdds),
    shares: stairOf(readings, baselineOdds),
    missing: [...unknown.map(missingFactor), ...missingHazards],
    hazards: present,
    equipment: collect(present, hazard => hazard.equipment),
    preparation: collect(present, hazard => hazard.preparation),
    minimumGrade: minimumGradeOf(baselineOdds, readings, present),
    dayOneInPerson: dayOneReasons.length > 0,
    dayOneReasons,
    difficulty: nucleusDifficulty(factors) ?? 'routine',
    timeFactor: timeFactorOf(factors, present),
    notes: notesOf(factors, calibration),
    source: riskSource,
  }
}

function readFactors(factors: RiskFactors): Reading[] {
  const readings = factorTable.map((row): Reading => {
    const found = row.read(factors)
    return found
      ? { row, ...found, known: true }
      : { row, oddsRatio: row.worst, label: `${row.label} not recorded, counted as ${row.worstLabel}`, known: false }
  })
  if (factors.surgeonGrade === undefined) return readings
  const oddsRatio = surgeonOddsRatios[factors.surgeonGrade]
  const row: FactorRow = { id: 'surgeon', label: 'Surgeon', least: oddsRatio, worst: oddsRatio, worstLabel: '', read: () => undefined }
  return [...readings, { row, oddsRatio, label: `Surgeon: ${factors.surgeonGrade.replaceAll('-', ' ')}`, known: true }]
}

/** Steepest first; equal treads keep the order of the published table. Factors that change nothing make no tread. */
function stairOf(readings: Reading[], baselineOdds: number): RiskShare[] {
  const whole = Math.log(product(readings.map(({ oddsRatio }) => oddsRatio)))
  let odds = baselineOdds
  return readings
    .filter(({ oddsRatio }) => oddsRatio !== 1)
    .sort((one, other) => other.oddsRatio - one.oddsRatio)
    .map(({ row, oddsRatio, label, known }) => {
      odds *= oddsRatio
      // Treads up and down may cancel to nothing; a share of nothing is not a number.
      const share = Math.abs(whole) < 1e-12 ? 0 : Math.log(oddsRatio) / whole
      return { factor: row.id, label, oddsRatio, known, share, probabilityAfter: probabilityOf(odds) }
    })
}

/** The eye alone decides who may operate, so the surgeon's own ratio stays out of it. */
function minimumGradeOf(baselineOdds: number, readings: Reading[], hazards: Hazard[]): MinimumGrade {
  const eyeAlone = probabilityOf(baselineOdds * product(readings.filter(({ row }) => row.id !== 'surgeon').map(({ oddsRatio }) => oddsRatio)))
  const byFigure = gradeSteps.find(({ from }) => eyeAlone >= from)!.grade
  return hazards.reduce((strictest, hazard) => stricterGrade(strictest, hazard.minimumGrade), byFigure)
}

/** The nucleus sets the multiple; every other hazard adds its own minutes, as parts of a routine case. */
function timeFactorOf(factors: RiskFactors, hazards: Hazard[]): number {
  const others = hazards.filter(({ id }) => id !== 'dense-nucleus' && id !== 'white-cataract')
  return others.reduce((sum, hazard) => sum + hazard.addedTime, difficultyTimeFactors[nucleusDifficulty(factors) ?? 'routine'])
}

function notesOf(factors: RiskFactors, calibration: Calibration | undefined): string[] {
  const notes: string[] = []
  if (kindContradictsGrade(factors)) notes.push('A nucleus of colour 6 or more is usually brunescent, and this cataract is called usual: look again.')
  if (factors.surgeonGrade === undefined) notes.push('For a consultant: no surgeon has been named.')
  if (factors.alphaBlocker === 'tamsulosin' || factors.alphaBlocker === 'other') {
    notes.push('The published ratio is for doxazosin; it stands in for this alpha-blocker.')
  }
  if (factors.surgeonGrade === 'staff-grade' || factors.surgeonGrade === 'associate-specialist') notes.push('This grade is historical; its ratio rests on the surgeons of 2001 to 2006.')
  notes.push(calibration
    ? 'Published odds scaled to this unit\'s own overall rate; not a published recalibration.'
    : 'Rates of 2001 to 2006; today\'s are about half.')
  return notes
}

function calibrationRatio(calibration: Calibration | undefined): number {
  if (!calibration) return 1
  const { overallProbability } = calibration
  if (!(overallProbability > 0 && overallProbability < 1)) {
    throw new DomainError('theatre.calibration-invalid', 'The unit\'s overall rate must lie between 0 and 1.', {
      fields: [{ field: 'overallProbability', code: 'out-of-range', message: 'Enter a rate above 0 and below 1.', limit: '0 to 1' }],
    })
  }
  return oddsOf(overallProbability) / oddsOf(publishedOverallProbability)
}

function missingFactor({ row }: Reading): MissingFactor {
  return { factor: row.id, label: row.label, countedAs: row.worstLabel }
}

function withLeast(readings: Reading[]): number {
  return product(readings.map(({ row, oddsRatio, known }) => known ? oddsRatio : row.least))
}

function collect(hazards: Hazard[], read: (hazard: Hazard) => string[]): string[] {
  return [...new Set(hazards.flatMap(read))]
}

const product = (values: number[]) => values.reduce((sofar, value) => sofar * value, 1)
const oddsOf = (probability: number) => probability / (1 - probability)
const probabilityOf = (odds: number) => odds / (1 + odds)
