import type { RiskFactors } from '#shared/domain/theatre/vocabulary'
import { describe, expect, it } from 'vitest'
import { assessRisk } from '#shared/domain/theatre/risk'

/** The reference eye of the model: every factor recorded, none present. */
const referenceEye: RiskFactors = {
  ageYears: 55, sex: 'female', glaucoma: false, diabeticRetinopathy: false, cataract: 'usual', noFundalView: false,
  pseudoexfoliation: false, weakZonules: false, pupil: 'large', axialLengthMm: 24.25, alphaBlocker: 'none', canLieFlat: true,
}

/**
 * Odds ratios: Narendran et al., Eye 2009;23:31-37, table as reproduced on a teaching page.
 * Cases A to E are the scenarios of a survey in BMJ Open Ophthalmology (without its odds column); percentages worked out
 * by hand from odds = 0.00736 / 0.99264 x composite. The reference probability is from memory.
 */
const workedCases: [string, Partial<RiskFactors>, number, number][] = [
  ['B, the reference eye', {}, 1.000, 0.736],
  ['A, woman in her 70s with glaucoma', { ageYears: 74, glaucoma: true, axialLengthMm: 23.68 }, 1.846, 1.350],
  ['H, woman of 70 to 79', { ageYears: 75 }, 1.420, 1.042],
  ['I, man of 70 to 79', { ageYears: 75, sex: 'male' }, 1.818, 1.330],
  ['E, man in his 80s with glaucoma and a short eye', { ageYears: 83, sex: 'male', glaucoma: true, axialLengthMm: 20.8 }, 2.629, 1.912],
  ['K, woman of 60 to 69 with a brunescent cataract', { ageYears: 65, cataract: 'brunescent' }, 3.409, 2.465],
  ['J, woman of 80 to 89, retinopathy, small pupil, fellow', { ageYears: 84, diabeticRetinopathy: true, pupil: 'small', surgeonGrade: 'fellow' }, 6.162, 4.369],
  ['C, man in his 60s, pseudoexfoliation, long eye, medium pupil', { ageYears: 66, sex: 'male', pseudoexfoliation: true, axialLengthMm: 26.1, pupil: 'medium' }, 7.140, 5.028],
  ['G, the same by a specialist registrar', { ageYears: 66, sex: 'male', pseudoexfoliation: true, axialLengthMm: 26.1, pupil: 'medium', surgeonGrade: 'specialist-registrar' }, 11.425, 7.809],
  ['D, man in his 90s, brunescent, no fundal view, cannot lie flat, doxazosin', { ageYears: 92, sex: 'male', cataract: 'brunescent', noFundalView: true, canLieFlat: false, alphaBlocker: 'doxazosin' }, 42.790, 24.086],
]

const everythingWorst: RiskFactors = {
  ageYears: 95, sex: 'male', glaucoma: true, diabeticRetinopathy: true, cataract: 'white', noFundalView: true,
  pseudoexfoliation: true, weakZonules: true, pupil: 'small', axialLengthMm: 27, alphaBlocker: 'doxazosin', canLieFlat: false,
}

describe('the published composite for capsule rupture', () => {
  it.each(workedCases)('case %s has its composite odds ratio and its chance', (_, factors, composite, percent) => {
    const assessment = assessRisk({ ...referenceEye, ...factors })
    expect(assessment.compositeOddsRatio).toBeCloseTo(composite, 2)
    expect(assessment.probability * 100).toBeCloseTo(percent, 2)
  })

  // Worked out from the same table: every patient factor at its worst.
  it('gives 80.7 % to the worst eye of a consultant and 94.0 % of a senior house officer', () => {
    const consultant = assessRisk(everythingWorst)
    expect(consultant.compositeOddsRatio).toBeCloseTo(564.3, 0)
    expect(consultant.probability * 100).toBeCloseTo(80.711, 1)
    const houseOfficer = assessRisk({ ...everythingWorst, surgeonGrade: 'senior-house-officer' })
    expect(houseOfficer.compositeOddsRatio).toBeCloseTo(2105, 0)
    expect(houseOfficer.probability * 100).toBeCloseTo(93.979, 1)
  })

  // Scaling by odds from 1.92 % to 1.01 % (Sim et al. 2024, 9730 of 961,208); worked out by hand: 0.521 times the odds.
  it.each([['A', 0.71], ['C', 2.69], ['D', 14.2]])('case %s falls to %f %% when a unit has 1.01 %% overall', (name, percent) => {
    const factors = workedCases.find(([title]) => title.startsWith(name))![1]
    expect(assessRisk({ ...referenceEye, ...factors }, { overallProbability: 0.0101 }).probability * 100).toBeCloseTo(percent, 1)
  })

  // 26.0 mm itself is in the published band of long eyes.
  it.each([[25.9, 1], [26, 1.47], [30, 1.47], [20.8, 1]])('counts an eye of %f mm with %f', (axialLengthMm, ratio) => {
    expect(assessRisk({ ...referenceEye, axialLengthMm }).compositeOddsRatio).toBeCloseTo(ratio, 10)
  })

  it.each([[59, 1], [60, 1.14], [69, 1.14], [70, 1.42], [79, 1.42], [80, 1.58], [89, 1.58], [90, 2.37], [104, 2.37]])('counts age %i with %f', (ageYears, ratio) => {
    expect(assessRisk({ ...referenceEye, ageYears }).compositeOddsRatio).toBeCloseTo(ratio, 10)
  })

  it.each([
    ['consultant', 1], ['associate-specialist', 0.87], ['staff-grade', 0.36], ['fellow', 1.65], ['specialist-registrar', 1.6], ['senior-house-officer', 3.73],
  ] as const)('counts a %s with %f', (surgeonGrade, ratio) => {
    expect(assessRisk({ ...referenceEye, surgeonGrade }).compositeOddsRatio).toBeCloseTo(ratio, 10)
  })

  // Either finding is one published factor; both together are not two.
  it.each([{ pseudoexfoliation: true }, { weakZonules: true }, { pseudoexfoliation: true, weakZonules: true }])('counts pseudoexfoliation and phacodonesis once: %o', (factors) => {
    expect(assessRisk({ ...referenceEye, ...factors }).compositeOddsRatio).toBeCloseTo(2.92, 10)
  })
})
