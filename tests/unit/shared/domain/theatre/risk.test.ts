import type { RiskFactors } from '#shared/domain/theatre/vocabulary'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { DomainError } from '#shared/domain/errors'
import { difficultyOfLocs, locsHasChanged, nucleusDifficulty } from '#shared/domain/theatre/nuclear-density'
import { assessRisk } from '#shared/domain/theatre/risk'
import { alphaBlockers, cataractKinds, minimumGrades, pupilSizes, sexes, surgeonGrades } from '#shared/domain/theatre/vocabulary'

const easyEye: RiskFactors = {
  ageYears: 55, sex: 'female', glaucoma: false, diabeticRetinopathy: false, cataract: 'usual', locs: { opalescence: 2.5, colour: 2.4 }, noFundalView: false,
  pseudoexfoliation: false, weakZonules: false, pupil: 'large', axialLengthMm: 23.5, alphaBlocker: 'none', canLieFlat: true,
  anteriorChamberDepthMm: 3.2, endothelialCellsPerMm2: 2600,
}

const tenths = fc.integer({ min: 1, max: 69 }).map(value => value / 10)
const anyFactors: fc.Arbitrary<RiskFactors> = fc.record({
  ageYears: fc.integer({ min: 0, max: 120 }),
  sex: fc.constantFrom(...sexes),
  glaucoma: fc.boolean(),
  diabeticRetinopathy: fc.boolean(),
  cataract: fc.constantFrom(...cataractKinds),
  locs: fc.record({ opalescence: tenths, colour: tenths }),
  noFundalView: fc.boolean(),
  pseudoexfoliation: fc.boolean(),
  weakZonules: fc.boolean(),
  pupil: fc.constantFrom(...pupilSizes),
  axialLengthMm: fc.double({ min: 14, max: 40, noNaN: true }),
  alphaBlocker: fc.constantFrom(...alphaBlockers),
  canLieFlat: fc.boolean(),
  anteriorChamberDepthMm: fc.double({ min: 0.5, max: 6, noNaN: true }),
  endothelialCellsPerMm2: fc.integer({ min: 0, max: 6000 }),
  surgeonGrade: fc.constantFrom(...surgeonGrades),
}, { requiredKeys: [] })

/** Each makes an eye worse, or leaves it as bad as it was. */
const worsenings: [string, Partial<RiskFactors>][] = [
  ['great age', { ageYears: 95 }], ['male sex', { sex: 'male' }], ['glaucoma', { glaucoma: true }], ['retinopathy', { diabeticRetinopathy: true }],
  ['a brunescent cataract', { cataract: 'brunescent' }], ['a white cataract', { cataract: 'white' }], ['a hidden fundus', { noFundalView: true }], ['pseudoexfoliation', { pseudoexfoliation: true }],
  ['weak zonules', { weakZonules: true }], ['a small pupil', { pupil: 'small' }], ['a long eye', { axialLengthMm: 27 }], ['doxazosin', { alphaBlocker: 'doxazosin' }],
  ['a patient who cannot lie flat', { canLieFlat: false }], ['a shallow chamber', { anteriorChamberDepthMm: 2 }], ['few endothelial cells', { endothelialCellsPerMm2: 900 }],
]

function refusedFields(factors: RiskFactors): string[] {
  try {
    assessRisk(factors)
    return []
  }
  catch (error) {
    expect(error).toBeInstanceOf(DomainError)
    expect((error as DomainError).code).toBe('theatre.factors-invalid')
    return (error as DomainError).fields.map(({ field }) => field)
  }
}

describe('assessRisk', () => {
  it('gives numbers, a chance between 0 and 1, and shares that add up, for any eye', () => {
    fc.assert(fc.property(anyFactors, (factors) => {
      const assessment = assessRisk(factors)
      const numbers = [assessment.probability, assessment.timeFactor, assessment.compositeOddsRatio, ...assessment.shares.flatMap(({ share, probabilityAfter }) => [share, probabilityAfter])]
      expect(numbers.every(Number.isFinite)).toBe(true)
      expect(assessment.probability).toBeGreaterThan(0)
      expect(assessment.probability).toBeLessThan(1)
      expect(assessment.timeFactor).toBeGreaterThanOrEqual(1)
      if (Math.abs(Math.log(assessment.compositeOddsRatio)) > 1e-6) {
        expect(assessment.shares.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 8)
        expect(assessment.shares.at(-1)!.probabilityAfter).toBeCloseTo(assessment.probability, 12)
      }
    }))
  })

  it.each(worsenings)('never falls in chance, time, grade or kind of check with %s', (_, worse) => {
    fc.assert(fc.property(anyFactors, (factors) => {
      const before = assessRisk({ ...easyEye, ...factors })
      const after = assessRisk({ ...easyEye, ...factors, ...worse })
      expect(after.probability).toBeGreaterThanOrEqual(before.probability - 1e-12)
      expect(minimumGrades.indexOf(after.minimumGrade)).toBeGreaterThanOrEqual(minimumGrades.indexOf(before.minimumGrade))
      expect(after.dayOneInPerson || !before.dayOneInPerson).toBe(true)
      // A white cortex in place of a brown nucleus, or the other way, is another hazard, not one more.
      expect(after.timeFactor).toBeGreaterThanOrEqual(before.timeFactor - 1e-12)
    }), { numRuns: 60 })
  })

  it('never falls when a finding is forgotten, and holds the known figure inside its interval', () => {
    fc.assert(fc.property(anyFactors, fc.constantFrom(...Object.keys(easyEye) as (keyof RiskFactors)[]), (factors, forgotten) => {
      const complete = assessRisk({ ...easyEye, ...factors })
      const lacking = assessRisk({ ...easyEye, ...factors, [forgotten]: undefined })
      expect(lacking.probability).toBeGreaterThanOrEqual(complete.probability - 1e-12)
      if (lacking.interval) {
        expect(lacking.interval.low).toBeLessThanOrEqual(complete.probability + 1e-12)
        expect(lacking.interval.high).toBe(lacking.probability)
      }
    }))
  })

  it('counts what is not recorded at its worst, says so, and gives the other end', () => {
    const { interval, missing, shares, probability } = assessRisk({ ...easyEye, pupil: undefined })
    expect(shares).toEqual([expect.objectContaining({ factor: 'pupil', oddsRatio: 1.45, known: false, label: 'Pupil not recorded, counted as small', share: 1 })])
    expect(missing).toContainEqual({ factor: 'pupil', label: 'Pupil', countedAs: 'small' })
    expect(interval!.low).toBeCloseTo(0.00736, 10)
    expect(probability).toBeCloseTo(0.00736 * 1.45 / (1 - 0.00736 + 0.00736 * 1.45), 10)
  })

  it('of an easy eye recorded in full asks for nothing', () => {
    expect(assessRisk(easyEye)).toMatchObject({
      interval: null, shares: [], missing: [], hazards: [], equipment: [], preparation: [], minimumGrade: 'any-supervised', dayOneInPerson: false, timeFactor: 1, difficulty: 'routine',
    })
  })

  it('of an eye of which nothing is recorded is for a consultant, and in person the next day, but takes no longer for it', () => {
    const assessment = assessRisk({})
    expect(assessment.minimumGrade).toBe('consultant')
    expect(assessment.dayOneInPerson).toBe(true)
    expect(assessment.timeFactor).toBe(1)
    expect(assessment.equipment).toEqual([])
    expect(assessment.missing.map(({ factor }) => factor)).toEqual(expect.arrayContaining(['age', 'sex', 'dense-nucleus', 'shallow-chamber', 'low-endothelial-count']))
  })

  it('draws the steepest tread first', () => {
    const { shares } = assessRisk({ ...easyEye, sex: 'male', cataract: 'brunescent', pupil: 'small' })
    expect(shares.map(({ factor }) => factor)).toEqual(['brunescent-or-white', 'pupil', 'sex'])
  })

  it('keeps the surgeon out of who may operate', () => {
    const eye: RiskFactors = { ...easyEye, ageYears: 92, sex: 'male' }
    expect(assessRisk({ ...eye, surgeonGrade: 'staff-grade' }).minimumGrade).toBe('experienced')
    expect(assessRisk({ ...eye, surgeonGrade: 'senior-house-officer' }).minimumGrade).toBe('experienced')
  })

  it('says when doxazosin stands in for another drug, and for whom the figure is', () => {
    expect(assessRisk({ ...easyEye, alphaBlocker: 'tamsulosin' }).notes.join(' ')).toContain('doxazosin')
    expect(assessRisk({ ...easyEye, alphaBlocker: 'doxazosin' }).notes.join(' ')).not.toContain('stands in')
    expect(assessRisk(easyEye).notes.join(' ')).toContain('consultant')
    expect(assessRisk({ ...easyEye, surgeonGrade: 'fellow' }).notes.join(' ')).not.toContain('For a consultant')
  })

  it.each([[5.9, 'usual', false], [6, 'usual', true], [6, 'brunescent', false]] as const)('asks to look again at colour %f called %s: %s', (colour, cataract, asks) => {
    expect(assessRisk({ ...easyEye, cataract, locs: { opalescence: 3, colour } }).notes.join(' ').includes('look again')).toBe(asks)
  })

  it('does not take a soft grade for a usual cataract', () => {
    expect(assessRisk({ ...easyEye, cataract: undefined }).shares).toEqual([expect.objectContaining({ factor: 'brunescent-or-white', known: false })])
  })

  it.each([
    ['ageYears', { ageYears: 121 }], ['ageYears', { ageYears: Number.NaN }], ['axialLengthMm', { axialLengthMm: 2.35 }], ['anteriorChamberDepthMm', { anteriorChamberDepthMm: 32 }],
    ['endothelialCellsPerMm2', { endothelialCellsPerMm2: -1 }], ['locs.opalescence', { locs: { opalescence: 7, colour: 3 } }], ['locs.colour', { locs: { opalescence: 3, colour: 0 } }],
    ['locs.colour', { locs: { opalescence: 3, colour: 3.25 } }],
  ])('refuses %s that cannot be', (field, factors) => {
    expect(refusedFields({ ...easyEye, ...factors })).toEqual([field])
  })

  it('refuses a word that it does not know', () => {
    expect(refusedFields({ ...easyEye, pupil: 'tiny' as never })).toEqual(['pupil'])
  })

  it.each([0, 1, -0.1, Number.NaN])('refuses a unit\'s rate of %f', (overallProbability) => {
    expect(() => assessRisk(easyEye, { overallProbability })).toThrow(expect.objectContaining({ code: 'theatre.calibration-invalid' }))
  })
})

describe('hazards', () => {
  it.each([
    ['dense-nucleus', { locs: { opalescence: 5, colour: 3 } }, true, 3], ['dense-nucleus', { cataract: 'brunescent' }, true, 3], ['white-cataract', { cataract: 'white', locs: undefined }, true, 3],
    ['small-pupil', { pupil: 'small' }, false, 1.25], ['pseudoexfoliation', { pseudoexfoliation: true }, true, 1.1], ['weak-zonules', { weakZonules: true }, true, 1.5],
    ['alpha-blocker', { alphaBlocker: 'tamsulosin' }, false, 1.1], ['shallow-chamber', { anteriorChamberDepthMm: 2.4 }, false, 1.15],
    ['low-endothelial-count', { endothelialCellsPerMm2: 1650 }, true, 1.1], ['cannot-lie-flat', { canLieFlat: false }, false, 1.2],
  ] as [string, Partial<RiskFactors>, boolean, number][])('%s from %o asks for equipment, preparation, its kind of check and its time', (id, factors, inPerson, timeFactor) => {
    const assessment = assessRisk({ ...easyEye, ...factors })
    expect(assessment.hazards.map(hazard => hazard.id)).toEqual([id])
    expect(assessment.equipment.length).toBeGreaterThan(0)
    expect(assessment.preparation.length).toBeGreaterThan(0)
    expect(assessment.dayOneInPerson).toBe(inPerson)
    expect(assessment.timeFactor).toBeCloseTo(timeFactor, 10)
  })

  it('that ask for the same thing put it on the trolley once', () => {
    const { equipment } = assessRisk({ ...easyEye, pupil: 'small', alphaBlocker: 'tamsulosin', pseudoexfoliation: true })
    expect(equipment.filter(item => item === 'Pupil ring in the room')).toHaveLength(1)
    expect(new Set(equipment).size).toBe(equipment.length)
  })

  it('add their minutes to those of the nucleus', () => {
    expect(assessRisk({ ...easyEye, locs: { opalescence: 5.5, colour: 5 }, pupil: 'small', canLieFlat: false }).timeFactor).toBeCloseTo(3.45, 10)
  })

  it.each([[2.5, []], [2.49, ['shallow-chamber']]])('a chamber of %f mm is %o', (anteriorChamberDepthMm, ids) => {
    expect(assessRisk({ ...easyEye, anteriorChamberDepthMm }).hazards.map(({ id }) => id)).toEqual(ids)
  })

  it.each([[2000, []], [1999, ['low-endothelial-count']]])('%i endothelial cells are %o', (endothelialCellsPerMm2, ids) => {
    expect(assessRisk({ ...easyEye, endothelialCellsPerMm2 }).hazards.map(({ id }) => id)).toEqual(ids)
  })

  it('a hazard of glaucoma alone still asks for the check in person', () => {
    expect(assessRisk({ ...easyEye, glaucoma: true })).toMatchObject({ hazards: [], dayOneInPerson: true, dayOneReasons: ['Glaucoma'] })
  })
})

describe('the density of the nucleus', () => {
  it.each([[0.1, 0.1, 'routine'], [3.9, 3.9, 'routine'], [4, 1, 'firm'], [1, 4.9, 'firm'], [5, 1, 'dense'], [1, 5, 'dense'], [6.9, 6.9, 'dense']] as const)('with opalescence %f and colour %f is %s', (opalescence, colour, difficulty) => {
    expect(difficultyOfLocs({ opalescence, colour })).toBe(difficulty)
  })

  it('under white cortex counts as dense, and is not known when nothing was recorded', () => {
    expect(nucleusDifficulty({ cataract: 'white' })).toBe('dense')
    expect(nucleusDifficulty({})).toBeUndefined()
    expect(nucleusDifficulty({ cataract: 'usual' })).toBeUndefined()
  })

  it('does not depend on which of the two grades is the worse', () => {
    fc.assert(fc.property(tenths, tenths, (one, other) => difficultyOfLocs({ opalescence: one, colour: other }) === difficultyOfLocs({ opalescence: other, colour: one })))
  })

  it.each([[3, 3.6, false], [3, 3.7, true], [2.3, 3, true], [3, 2.3, true]])('from %f to %f has changed: %s', (before, after, changed) => {
    expect(locsHasChanged({ opalescence: before, colour: 1 }, { opalescence: after, colour: 1 })).toBe(changed)
  })
})
