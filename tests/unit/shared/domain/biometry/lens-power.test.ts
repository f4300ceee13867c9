import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { completeConstants } from '#shared/domain/biometry/lens-power/constants'
import { learnFromFirstEye } from '#shared/domain/biometry/lens-power/fellow-eye'
import { formulaEye, powerForTarget, predictedRefraction } from '#shared/domain/biometry/lens-power/formulas'
import { optimiseConstant } from '#shared/domain/biometry/lens-power/optimise-constant'
import { secondCheck } from '#shared/domain/biometry/lens-power/second-check'
import type { SecondCheckInput } from '#shared/domain/biometry/lens-power/second-check'
import { DomainError } from '#shared/domain/errors'
import { formulaIds } from '#shared/domain/biometry/vocabulary'
import type { EyeBiometry, FormulaId } from '#shared/domain/biometry/vocabulary'

const constants = { aConstant: 119, surgeonFactorMm: 1.84, personalAcdMm: 5.64, haigis: { a0Mm: -0.769, a1: 0.234, a2: 0.217 } }
const biometry: EyeBiometry = { eye: 'left', axialLengthMm: 23.5, k1D: 43, k1AxisDegrees: 178, k2D: 44, k2AxisDegrees: 88, anteriorChamberDepthMm: 3.1 }
const plan: SecondCheckInput = { biometry, constants, powerD: 21.5, targetD: -0.25, limitD: 0.5 }
const errorOf = (act: () => unknown): DomainError => {
  try {
    act()
  }
  catch (error) {
    if (error instanceof DomainError) return error
    throw error
  }
  throw new Error('nothing was refused')
}

const mm = (min: number, max: number) => fc.double({ min, max, noNaN: true })
/** Eyes on which all four formulas answer, clear of the corneal height that SRK/T loses in long steep eyes. */
const eyes = fc.record({ axialLengthMm: mm(20, 28), k1D: mm(40, 46), k2D: mm(40, 46), anteriorChamberDepthMm: mm(2, 4.2), k1AxisDegrees: mm(0, 180), k2AxisDegrees: mm(0, 180) }).map(each => ({ ...each, eye: 'right' }) as EyeBiometry)
const formulas = fc.constantFrom<FormulaId>(...formulaIds)
const emmetropic = (formula: FormulaId, eye: EyeBiometry) => powerForTarget(formula, eye, constants, 0).powerD

describe('properties of the formulas', () => {
  it('comes back from power to refraction and to power within 0.01 D', () => {
    fc.assert(fc.property(formulas, eyes, mm(-6, 4), (formula, eye, targetD) => {
      const { powerD } = powerForTarget(formula, eye, constants, targetD)
      expect(Math.abs(predictedRefraction(formula, eye, constants, powerD).refractionD - targetD)).toBeLessThan(0.01)
    }), { numRuns: 500 })
  })
  it('comes back from refraction to power and to refraction within 0.01 D', () => {
    fc.assert(fc.property(formulas, eyes, mm(5, 34), (formula, eye, powerD) => {
      const { refractionD } = predictedRefraction(formula, eye, constants, powerD)
      expect(Math.abs(powerForTarget(formula, eye, constants, refractionD).powerD - powerD)).toBeLessThan(0.01)
    }), { numRuns: 500 })
  })
  it('asks for a weaker lens in a longer eye', () => {
    fc.assert(fc.property(formulas, eyes, mm(0.05, 0.5), (formula, eye, longer) => {
      expect(emmetropic(formula, { ...eye, axialLengthMm: eye.axialLengthMm + longer })).toBeLessThan(emmetropic(formula, eye))
    }), { numRuns: 500 })
  })
  it('asks for a weaker lens behind a steeper cornea', () => {
    fc.assert(fc.property(formulas, eyes, mm(0.05, 0.5), (formula, eye, steeper) => {
      expect(emmetropic(formula, { ...eye, k1D: eye.k1D + steeper, k2D: eye.k2D + steeper })).toBeLessThan(emmetropic(formula, eye))
    }), { numRuns: 500 })
  })
  it('predicts more short sight for a stronger lens, and asks for a stronger lens for more short sight', () => {
    fc.assert(fc.property(formulas, eyes, mm(5, 33), mm(0.05, 1), (formula, eye, powerD, stronger) => {
      const at = (power: number) => predictedRefraction(formula, eye, constants, power).refractionD
      expect(at(powerD + stronger)).toBeLessThan(at(powerD))
      expect(powerForTarget(formula, eye, constants, -stronger).powerD).toBeGreaterThan(emmetropic(formula, eye))
    }), { numRuns: 500 })
  })
  it('does not mind which eye it is, where the meridians lie, or which meridian is K1', () => {
    fc.assert(fc.property(eyes, mm(5, 33), (eye, powerD) => {
      const seen = (given: EyeBiometry) => secondCheck({ ...plan, biometry: given, powerD }).predictions.map(each => each.predictedD)
      const mirrored: EyeBiometry = { ...eye, eye: 'left', k1AxisDegrees: 180 - eye.k1AxisDegrees, k2AxisDegrees: 180 - eye.k2AxisDegrees }
      const exchanged: EyeBiometry = { ...eye, k1D: eye.k2D, k2D: eye.k1D, k1AxisDegrees: eye.k2AxisDegrees, k2AxisDegrees: eye.k1AxisDegrees }
      expect(seen(mirrored)).toEqual(seen(eye))
      for (const [index, value] of seen(exchanged).entries()) expect(value).toBeCloseTo(seen(eye)[index]!, 9)
    }))
  })
  it('gives the same answer for the same radius whatever index its power was printed with', () => {
    fc.assert(fc.property(formulas, eyes, fc.constantFrom(1.336, 1.333, 1.332, 1.3315), (formula, eye, keratometricIndex) => {
      const scale = (keratometricIndex - 1) / 0.3375
      expect(emmetropic(formula, { ...eye, keratometricIndex, k1D: eye.k1D * scale, k2D: eye.k2D * scale })).toBeCloseTo(emmetropic(formula, eye), 9)
    }))
  })
  it('leaves its input alone', () => {
    const frozen = Object.freeze({ ...biometry })
    expect(secondCheck(Object.freeze({ ...plan, biometry: frozen }))).toEqual(secondCheck(plan))
  })
})

/** Every number anywhere in an answer. */
function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value]
  return typeof value === 'object' && value !== null ? Object.values(value).flatMap(numbersIn) : []
}
const anyNumber = fc.oneof(fc.double(), fc.double({ min: -60, max: 60 }), mm(14, 40), fc.constantFrom(NaN, Infinity, -Infinity, 0, -0, Number.MAX_VALUE, Number.MIN_VALUE), fc.constant(undefined))
const odd = fc.oneof({ arbitrary: anyNumber, weight: 6 }, { arbitrary: fc.anything() as fc.Arbitrary<unknown>, weight: 1 })
const usualOr = (value: number) => fc.oneof({ arbitrary: fc.constant<unknown>(value), weight: 6 }, { arbitrary: odd, weight: 1 })

describe('any input at all', () => {
  it('answers a second check with finite numbers or refuses with a typed error', () => {
    let answered = 0
    let refused = 0
    const anyPlan = fc.record({
      biometry: fc.record({ eye: fc.constantFrom('right', 'left', 'both'), axialLengthMm: usualOr(23.5), k1D: usualOr(43), k1AxisDegrees: usualOr(8), k2D: usualOr(44), k2AxisDegrees: usualOr(98), anteriorChamberDepthMm: usualOr(3.1), keratometricIndex: usualOr(1.3375) }),
      constants: fc.record({ aConstant: usualOr(119), surgeonFactorMm: usualOr(1.8), personalAcdMm: usualOr(5.6), haigis: fc.record({ a0Mm: usualOr(-0.769), a1: usualOr(0.234), a2: usualOr(0.217) }) }),
      powerD: usualOr(21), targetD: usualOr(-0.5), limitD: usualOr(0.5),
    })
    fc.assert(fc.property(anyPlan, (given) => {
      try {
        const check = secondCheck(given as unknown as SecondCheckInput)
        expect(numbersIn({ ...check, preferred: [] }).every(Number.isFinite)).toBe(true)
        answered++
      }
      catch (error) {
        expect(error).toBeInstanceOf(DomainError)
        expect((error as DomainError).code).toMatch(/^biometry\./)
        expect((error as DomainError).fields.length).toBeGreaterThan(0)
        refused++
      }
    }), { numRuns: 3000 })
    expect(answered).toBeGreaterThan(100)
    expect(refused).toBeGreaterThan(100)
  })
  it('gives a finite power and refraction across everything that may be stored, or refuses', () => {
    const wide = fc.record({ axialLengthMm: mm(14, 40), k1D: mm(30, 70), k2D: mm(30, 70), anteriorChamberDepthMm: mm(1, 6.5) }).map(each => ({ ...biometry, ...each }))
    fc.assert(fc.property(formulas, wide, mm(-25, 65), mm(-12, 8), (formula, eye, powerD, targetD) => {
      for (const act of [() => predictedRefraction(formula, eye, constants, powerD), () => powerForTarget(formula, eye, constants, targetD)]) {
        try {
          const { howWorkedOut, ...answer } = act()
          expect(numbersIn(answer).concat(numbersIn(howWorkedOut)).every(Number.isFinite)).toBe(true)
        }
        catch (error) {
          expect(error).toBeInstanceOf(DomainError)
        }
      }
    }), { numRuns: 1500 })
  })
})

describe('the second check', () => {
  it('gives four predictions, their spread and whether each is within the limit', () => {
    const check = secondCheck(plan)
    expect(check.predictions.map(each => each.formula)).toEqual(['srk-t', 'holladay-1', 'hoffer-q', 'haigis'])
    const predicted = check.predictions.map(each => each.predictedD)
    expect(check.spreadD).toBeCloseTo(Math.max(...predicted) - Math.min(...predicted), 12)
    expect(check).toMatchObject({ eye: 'left', agreement: 'agrees', outsideLimit: [], refused: [], powerD: 21.5, cautions: [] })
    for (const each of check.predictions) expect(each.fromTargetD).toBeCloseTo(each.predictedD - plan.targetD, 12)
  })
  it('agrees with the worked screen of the design: 24.08 mm, 43.36 and 44.75 D, 3.21 mm, A 118.7, +19.0 D', () => {
    const check = secondCheck({ biometry: { ...biometry, axialLengthMm: 24.08, k1D: 43.36, k2D: 44.75, anteriorChamberDepthMm: 3.21 }, constants: { aConstant: 118.7 }, powerD: 19, targetD: -0.25, limitD: 0.5 })
    for (const [index, predictedD] of [-0.28, -0.4, -0.56, 0.06].entries()) expect(Math.abs(check.predictions[index]!.predictedD - predictedD)).toBeLessThan(0.015)
    expect(check.agreement).toBe('agrees')
    expect(check.constants.converted).toEqual(['holladay-1', 'hoffer-q', 'haigis'])
    expect(check.cautions[0]).toContain('not optimised')
  })
  it('differs as soon as one formula is outside the limit, and names it', () => {
    const check = secondCheck({ biometry: { ...biometry, axialLengthMm: 24.08, k1D: 43.36, k2D: 44.75, anteriorChamberDepthMm: 3.21 }, constants: { aConstant: 118.7 }, powerD: 18.5, targetD: -0.25, limitD: 0.5 })
    expect(check).toMatchObject({ agreement: 'differs', outsideLimit: ['haigis'] })
  })
  it('counts a difference of exactly the limit as inside, also where binary fractions make it larger', () => {
    const limits = [0.1, 0.3, 0.35, 0.5, 0.6, 0.7]
    const checks = [18, 19.5, 21, 22.5].flatMap((powerD) => {
      const { predictedD } = secondCheck({ ...plan, powerD, targetD: 0 }).predictions[0]!
      return limits.map(limitD => ({ limitD, prediction: secondCheck({ ...plan, powerD, targetD: predictedD - limitD, limitD }).predictions[0]! }))
    })
    expect(checks.some(each => each.prediction.fromTargetD > each.limitD)).toBe(true)
    expect(checks.every(each => each.prediction.withinLimit)).toBe(true)
    const { predictedD } = secondCheck({ ...plan, targetD: 0 }).predictions[0]!
    expect(secondCheck({ ...plan, targetD: predictedD - 0.501 }).predictions[0]!.withinLimit).toBe(false)
  })
  it('does without Haigis when the chamber was not measured, and says why', () => {
    const { anteriorChamberDepthMm: _, ...without } = biometry
    const check = secondCheck({ ...plan, biometry: without })
    expect(check.predictions).toHaveLength(3)
    expect(check.refused).toMatchObject([{ formula: 'haigis', code: 'biometry.chamber-depth-missing', fields: [{ field: 'anteriorChamberDepthMm' }] }])
    expect(check.cautions[0]).toContain('3 of 4 formulas')
  })
  it('drops SRK/T where its corneal height does not exist and keeps the rest', () => {
    const check = secondCheck({ ...plan, biometry: { ...biometry, axialLengthMm: 30, k1D: 47.5, k2D: 48.5, anteriorChamberDepthMm: 3.6 }, powerD: -5 })
    expect(check.refused.map(each => each.code)).toEqual(['biometry.srk-t-no-corneal-height'])
    expect(check.predictions).toHaveLength(3)
  })
  it('shows how each figure is worked out: publication, inputs and steps with units', () => {
    for (const { howWorkedOut } of secondCheck(plan).predictions) {
      expect(howWorkedOut.publication).toMatch(/(19|20)\d\d;\d+:\d+/)
      expect(howWorkedOut.inputs).toContainEqual({ name: 'Axial length', value: 23.5, unit: 'mm' })
      expect(howWorkedOut.steps.map(each => each.name)).toEqual(expect.arrayContaining(['Corneal power used', 'Optical length', 'Lens position', 'Vertex distance']))
    }
  })
  it('holds no power but the chosen one', () => {
    expect(Object.keys(secondCheck(plan)).filter(key => key.toLowerCase().includes('power'))).toEqual(['powerD'])
    expect(Object.keys(secondCheck(plan).predictions[0]!).filter(key => key.toLowerCase().includes('power'))).toEqual([])
  })

  it.each<[string, Partial<SecondCheckInput>, string, string]>([
    ['an eye of 17.9 mm', { biometry: { ...biometry, axialLengthMm: 17.9 } }, 'biometry.eye-out-of-formula-range', 'axialLengthMm'],
    ['an eye of 36.1 mm', { biometry: { ...biometry, axialLengthMm: 36.1 } }, 'biometry.eye-out-of-formula-range', 'axialLengthMm'],
    ['a cornea of 33 D', { biometry: { ...biometry, k1D: 33, k2D: 33 } }, 'biometry.eye-out-of-formula-range', 'k1D'],
    ['a cornea of 55 D', { biometry: { ...biometry, k1D: 55, k2D: 55 } }, 'biometry.eye-out-of-formula-range', 'k1D'],
    ['a cornea that was reshaped', { cornealRefractiveSurgery: true }, 'biometry.cornea-operated', 'cornealRefractiveSurgery'],
    ['a length in cm', { biometry: { ...biometry, axialLengthMm: 2.35 } }, 'biometry.unit-mix-up', 'axialLengthMm'],
    ['a radius as K', { biometry: { ...biometry, k1D: 7.8 } }, 'biometry.unit-mix-up', 'k1D'],
    ['the K reading as lens power', { powerD: 43 }, 'biometry.unit-mix-up', 'powerD'],
    ['a lens of 61 D', { powerD: 61 }, 'biometry.plan-out-of-range', 'powerD'],
    ['a lens that leaves 32 D', { powerD: 60, biometry: { ...biometry, axialLengthMm: 26 } }, 'biometry.no-formula-usable', 'powerD'],
    ['a target of +6 D', { targetD: 6 }, 'biometry.plan-out-of-range', 'targetD'],
    ['a limit of 0', { limitD: 0 }, 'biometry.plan-out-of-range', 'limitD'],
    ['no power', { powerD: NaN }, 'biometry.plan-out-of-range', 'powerD'],
    ['an A constant of 19', { constants: { aConstant: 19 } }, 'biometry.constants-out-of-range', 'constants.aConstant'],
    ['an A constant as surgeon factor', { constants: { aConstant: 119, surgeonFactorMm: 119 } }, 'biometry.constants-out-of-range', 'constants.surgeonFactorMm'],
    ['no constants', { constants: undefined as unknown as SecondCheckInput['constants'] }, 'biometry.constants-out-of-range', 'constants'],
  ])('refuses %s with %#, a field and a limit', (_, change, code, field) => {
    const error = errorOf(() => secondCheck({ ...plan, ...change }))
    expect(error.code).toBe(code)
    const problem = error.fields.find(each => each.field === field)!
    expect(problem.message.length).toBeGreaterThan(15)
    expect(problem.limit ?? '').not.toBe('')
  })
  it('refuses a lens position that no eye has', () => {
    const error = errorOf(() => formulaEye('haigis', biometry, completeConstants({ ...constants, haigis: { a0Mm: 8, a1: 0.4, a2: 0.1 } })))
    expect(error).toMatchObject({ code: 'biometry.lens-position-out-of-range', detail: { formula: 'haigis' } })
  })
  it('refuses a formula that is not one of the four', () => {
    expect(errorOf(() => powerForTarget('mine' as FormulaId, biometry, constants, 0)).code).toBe('biometry.formula-unknown')
  })
})

describe('what the first eye taught', () => {
  const first = { predictedD: -0.24, achievedD: -0.62, sameLensModel: true, weeksAfterSurgery: 6 }
  it('halves the first eye\'s error: predicted -0.24, got -0.62, so -0.28 reads -0.47', () => {
    const lesson = learnFromFirstEye(first, -0.28)
    expect(lesson.predictionErrorD).toBeCloseTo(-0.38, 9)
    expect(lesson.halfD).toBeCloseTo(-0.19, 9)
    expect(lesson.adjustedPredictionD).toBeCloseTo(-0.47, 9)
    expect(lesson.source).toContain('Aristodemou')
  })
  it.each([
    ['too large an error', { achievedD: 1.5 }], ['another lens model', { sameLensModel: false }], ['a lens model nobody recorded', { sameLensModel: undefined }],
    ['a refraction of 3 weeks', { weeksAfterSurgery: 3 }], ['a refraction of unknown age', { weeksAfterSurgery: undefined }],
    ['eyes of different length', { lengthDifferenceMm: -0.4 }], ['corneas of different power', { meanKDifferenceD: 1 }],
  ])('shows the error but adjusts nothing for %s', (_, change) => {
    const lesson = learnFromFirstEye({ ...first, ...change }, -0.28)
    expect(lesson.adjustedPredictionD).toBeUndefined()
    expect(lesson.reasonsAgainst).toHaveLength(1)
  })
  it.each([['predictedD', NaN], ['achievedD', 25], ['weeksAfterSurgery', NaN]])('refuses %s %d', (field, value) => {
    expect(errorOf(() => learnFromFirstEye({ ...first, [field]: value }, 0))).toMatchObject({ code: 'biometry.first-eye-out-of-range', fields: [{ field: `first.${field}` }] })
  })
})

describe('optimising a constant', () => {
  const resultsFor = (formula: FormulaId, truth: typeof constants) => [20.9, 22.3, 23.1, 23.9, 24.6, 26.2].map((axialLengthMm) => {
    const eye = { ...biometry, axialLengthMm }
    const powerD = Math.round(powerForTarget(formula, eye, truth, -0.2).powerD * 2) / 2
    return { biometry: eye, powerD, achievedD: predictedRefraction(formula, eye, truth, powerD).refractionD }
  })
  it.each(formulaIds)('finds for %s the constant that made the results', (formula) => {
    const truth = { aConstant: 119.4, surgeonFactorMm: 2.05, personalAcdMm: 5.9, haigis: { a0Mm: -0.5, a1: 0.234, a2: 0.217 } }
    const found = optimiseConstant(formula, resultsFor(formula, truth), constants)
    const wanted = { 'srk-t': 119.4, 'holladay-1': 2.05, 'hoffer-q': 5.9, 'haigis': -0.5 }[formula]
    expect(found.optimised).toBeCloseTo(wanted, 6)
    expect(found.after.standardDeviationD).toBeLessThan(1e-6)
  })
  it('keeps a constant that is already right', () => {
    expect(optimiseConstant('srk-t', resultsFor('srk-t', constants), constants).optimised).toBeCloseTo(119, 6)
  })
  it('refuses too few eyes, results that fit no such lens, and names the eye that is wrong', () => {
    const results = resultsFor('srk-t', constants)
    expect(errorOf(() => optimiseConstant('srk-t', results.slice(0, 4), constants)).code).toBe('biometry.too-few-results')
    expect(errorOf(() => optimiseConstant('srk-t', results.map(each => ({ ...each, achievedD: each.achievedD + 9 })), constants)).code).toMatch(/^biometry\.(constant-not-found|lens-position-out-of-range)$/)
    expect(errorOf(() => optimiseConstant('srk-t', results.map((each, index) => index === 2 ? { ...each, biometry: { ...biometry, k1D: 7.8 } } : each), constants))).toMatchObject({ code: 'biometry.unit-mix-up', fields: [{ field: 'results.2.biometry.k1D' }] })
    expect(errorOf(() => optimiseConstant('srk-t', results.map((each, index) => index === 1 ? { ...each, achievedD: NaN } : each), constants)).fields[0]!.field).toBe('results.1.achievedD')
  })
})
