import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { biometryProblems, fieldLimits, requireStorable } from '#shared/domain/biometry/limits'
import { checkPlausibility } from '#shared/domain/biometry/plausibility'
import { oneEyeRules, twoEyeRules } from '#shared/domain/biometry/plausibility-rules'
import { checkRepeatability, repeatabilityRules } from '#shared/domain/biometry/repeatability'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'
import { DomainError } from '#shared/domain/errors'

const usual: EyeBiometry = { eye: 'right', axialLengthMm: 23.49, axialLengthSdMm: 0.02, k1D: 43.5, k1AxisDegrees: 180, k2D: 44.25, k2AxisDegrees: 90, anteriorChamberDepthMm: 3.1, lensThicknessMm: 4.37, whiteToWhiteMm: 11.8 }
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

describe('slips that are recognised by name', () => {
  it.each<[string, Partial<EyeBiometry>, keyof EyeBiometry, string]>([
    ['a length in cm', { axialLengthMm: 2.349 }, 'axialLengthMm', 'centimetres. Enter millimetres: 23.49'],
    ['a length in metres', { axialLengthMm: 0.02349 }, 'axialLengthMm', 'metres'],
    ['a length in micrometres', { axialLengthMm: 23490 }, 'axialLengthMm', 'micrometres. Enter millimetres: 23.49'],
    ['a length without its point', { axialLengthMm: 2349 }, 'axialLengthMm', 'decimal point was left out: 23.49'],
    ['a length with one decimal without its point', { axialLengthMm: 235 }, 'axialLengthMm', '23.5 mm'],
    ['a K reading as length', { axialLengthMm: 43.5 }, 'axialLengthMm', 'corneal power'],
    ['length and chamber exchanged', { axialLengthMm: 3.1, anteriorChamberDepthMm: 23.49 }, 'axialLengthMm', 'swapped'],
    ['length and K1 exchanged', { axialLengthMm: 43.5, k1D: 23.49 }, 'k1D', 'swapped'],
    ['a radius in mm as K1', { k1D: 7.76 }, 'k1D', '337.5 / 7.76 = 43.49 D'],
    ['a radius in mm as K2', { k2D: 7.6 }, 'k2D', '44.41 D'],
    ['a radius in cm as K', { k2D: 0.77 }, 'k2D', 'radius in cm'],
    ['a lens power as K', { k1D: 21.5 }, 'k1D', 'power of a lens'],
    ['a K without its point', { k1D: 4350 }, 'k1D', '43.5 D'],
    ['a meridian of 270', { k1AxisDegrees: 270 }, 'k1AxisDegrees', '90'],
    ['a spread in micrometres', { axialLengthSdMm: 20 }, 'axialLengthSdMm', '0.02'],
    ['a chamber in cm', { anteriorChamberDepthMm: 0.31 }, 'anteriorChamberDepthMm', '3.1'],
    ['a chamber in micrometres', { anteriorChamberDepthMm: 3100 }, 'anteriorChamberDepthMm', '3.1'],
    ['a chamber without its point', { anteriorChamberDepthMm: 310 }, 'anteriorChamberDepthMm', '3.1 mm'],
    ['a lens in cm', { lensThicknessMm: 0.437 }, 'lensThicknessMm', '4.37'],
    ['a lens in micrometres', { lensThicknessMm: 4370 }, 'lensThicknessMm', '4.37'],
    ['a diameter in cm', { whiteToWhiteMm: 1.18 }, 'whiteToWhiteMm', '11.8'],
    ['a diameter without its point', { whiteToWhiteMm: 118 }, 'whiteToWhiteMm', '11.8 mm'],
    ['an index of 337.5', { keratometricIndex: 337.5 }, 'keratometricIndex', '1.3375'],
  ])('%s', (_, change, field, words) => {
    const report = checkPlausibility({ ...usual, ...change })
    expect(report.verdict).toBe('refuse')
    const problem = report.findings.flatMap(each => each.problems ?? []).find(each => each.field === field)!
    expect(problem.code).toBe('unit-mix-up')
    expect(problem.message).toContain(words)
    expect(problem.limit).toBeTruthy()
    expect(errorOf(() => requireStorable({ ...usual, ...change })).code).toBe('biometry.unit-mix-up')
  })
})

describe('values that nobody has', () => {
  it.each(Object.entries(fieldLimits))('%s is stored at its limits and refused beyond', (field, { min, max }) => {
    for (const value of [min, max]) expect(biometryProblems({ ...usual, [field]: value }).map(each => each.field)).not.toContain(field)
    for (const value of [min - 1e-6, max + 1e-6]) expect(biometryProblems({ ...usual, [field]: value }).map(each => each.field)).toContain(field)
  })
  it.each(Object.entries(fieldLimits))('%s that is not a number is refused', (field) => {
    for (const value of [NaN, Infinity, '23', {}]) expect(biometryProblems({ ...usual, [field]: value })).toMatchObject([{ field, code: 'not-a-number' }])
  })
  it('names every field that is missing, and only those that are needed', () => {
    expect(biometryProblems({} as EyeBiometry).map(each => each.field)).toEqual(['axialLengthMm', 'k1D', 'k1AxisDegrees', 'k2D', 'k2AxisDegrees', 'eye'])
    expect(biometryProblems(null as unknown as EyeBiometry)).toHaveLength(1)
  })
})

describe('the report', () => {
  it('answers every rule of the table in its order, with version, threshold, source and a sentence', () => {
    const { findings } = checkPlausibility(usual, { ...usual, eye: 'left', axialLengthMm: 23.5 })
    expect(findings.map(each => each.ruleId)).toEqual([...oneEyeRules, ...twoEyeRules].map(each => each.id))
    for (const each of findings) {
      expect(each.ruleVersion).toBeGreaterThanOrEqual(1)
      expect(each.source.length).toBeGreaterThan(10)
      expect(each.threshold.length).toBeGreaterThan(5)
      expect(each.sentence.length).toBeGreaterThan(5)
    }
  })
  it('has no two rules of one name', () => {
    const ids = [...oneEyeRules, ...twoEyeRules, ...repeatabilityRules].map(each => each.id)
    expect(new Set(ids).size).toBe(ids.length)
  })
  it('says not measured of what is absent, which is not a pass', () => {
    const { findings, verdict } = checkPlausibility({ eye: 'right', axialLengthMm: 23.5, k1D: 43, k1AxisDegrees: 180, k2D: 44, k2AxisDegrees: 90 })
    expect(findings.filter(each => each.answer === 'not-measured').map(each => each.ruleId)).toEqual(['axial-length.readings-differ', 'chamber-depth.unusual', 'lens-thickness.unusual', 'white-to-white.unusual', 'lengths.do-not-add-up'])
    expect(verdict).toBe('pass')
  })
  it('warns of the design\'s left eye: readings that do not agree, a longer eye and a larger diameter', () => {
    const right: EyeBiometry = { eye: 'right', axialLengthMm: 23.52, axialLengthSdMm: 0.02, k1D: 43.18, k1AxisDegrees: 178, k2D: 44.02, k2AxisDegrees: 88, anteriorChamberDepthMm: 3.12, lensThicknessMm: 4.61, whiteToWhiteMm: 11.9 }
    const left: EyeBiometry = { eye: 'left', axialLengthMm: 24.11, axialLengthSdMm: 0.09, k1D: 43.36, k1AxisDegrees: 8, k2D: 44.75, k2AxisDegrees: 98, anteriorChamberDepthMm: 3.21, lensThicknessMm: 4.58, whiteToWhiteMm: 12.8 }
    expect(checkPlausibility(left, right).warnings.map(each => each.ruleId)).toEqual(['axial-length.readings-differ', 'eyes.length-differs', 'eyes.white-to-white-differs'])
    expect(checkPlausibility(left, right).warnings[1]!.sentence).toBe('The eyes differ by 0.59 mm in length. Measure both again, or say what explains it.')
  })
  it('does not compare with a fellow eye that was mistyped, and refuses the same eye twice', () => {
    expect(checkPlausibility(usual, { ...usual, eye: 'left', axialLengthMm: 2.35 }).findings).toHaveLength(oneEyeRules.length)
    expect(errorOf(() => checkPlausibility(usual, usual))).toMatchObject({ code: 'biometry.same-eye-twice', fields: [{ field: 'fellow.eye', limit: 'left' }] })
  })
})

const mm = (min: number, max: number) => fc.double({ min, max, noNaN: true })
const anyEye = fc.record({ axialLengthMm: mm(14, 40), k1D: mm(30, 70), k1AxisDegrees: mm(0, 180), k2D: mm(30, 70), k2AxisDegrees: mm(0, 180), anteriorChamberDepthMm: mm(1, 6.5), lensThicknessMm: mm(1, 9), whiteToWhiteMm: mm(6, 16) }).map(each => ({ ...each, eye: 'right' }) as EyeBiometry)
const mirrored = (eye: EyeBiometry): EyeBiometry => ({ ...eye, eye: eye.eye === 'right' ? 'left' : 'right', k1AxisDegrees: 180 - eye.k1AxisDegrees, k2AxisDegrees: 180 - eye.k2AxisDegrees })
const answers = (eye: EyeBiometry, fellow?: EyeBiometry) => checkPlausibility(eye, fellow).findings.map(each => `${each.ruleId} ${each.answer}`)

describe('properties of the rules', () => {
  it('judges a right eye and its mirror image alike', () => {
    fc.assert(fc.property(anyEye, (eye) => {
      expect(answers(mirrored(eye))).toEqual(answers(eye))
    }))
  })
  it('judges the difference between two eyes alike from either side', () => {
    fc.assert(fc.property(anyEye, anyEye, (one, other) => {
      const left = mirrored(other)
      const between = (list: string[]) => list.filter(each => each.startsWith('eyes.'))
      expect(between(answers(one, left))).toEqual(between(answers(left, one)))
    }))
  })
  it('never throws and never reports a number that is not one, whatever was typed', () => {
    const odd = fc.oneof(fc.double(), fc.constant(undefined), fc.constant(null), fc.string(), mm(1, 60))
    const typed = fc.record({ eye: fc.constantFrom('right', 'left', ''), axialLengthMm: odd, axialLengthSdMm: odd, k1D: odd, k1AxisDegrees: odd, k2D: odd, k2AxisDegrees: odd, keratometricIndex: odd, anteriorChamberDepthMm: odd, lensThicknessMm: odd, whiteToWhiteMm: odd })
    fc.assert(fc.property(typed, (given) => {
      const report = checkPlausibility(given as unknown as EyeBiometry)
      expect(['pass', 'warn', 'refuse']).toContain(report.verdict)
      for (const each of report.findings) {
        expect(each.value === undefined || Number.isFinite(each.value)).toBe(true)
        expect(each.sentence).not.toMatch(/NaN|Infinity|undefined/)
      }
    }), { numRuns: 1000 })
  })
})

describe('repeated readings', () => {
  it('refuses one reading, two eyes, and a reading that cannot be stored', () => {
    expect(errorOf(() => checkRepeatability([usual])).code).toBe('biometry.too-few-readings')
    expect(errorOf(() => checkRepeatability([usual, { ...usual, eye: 'left' }])).code).toBe('biometry.eyes-mixed')
    expect(errorOf(() => checkRepeatability([usual, { ...usual, k1D: 7.7 }])).code).toBe('biometry.unit-mix-up')
  })
  it('does not judge what was measured once, or the meridian of a round cornea', () => {
    const { anteriorChamberDepthMm: _, ...without } = usual
    const notMeasured = (readings: EyeBiometry[]) => checkRepeatability(readings).filter(each => each.answer === 'not-measured').map(each => each.ruleId)
    expect(notMeasured([usual, without])).toEqual(['repeat.chamber-depth'])
    expect(notMeasured([usual, { ...usual, k2D: 43.8 }])).toEqual(['repeat.steep-meridian'])
  })
  it('takes the widest pair of several readings', () => {
    const finding = checkRepeatability([usual, { ...usual, axialLengthMm: 23.52 }, { ...usual, axialLengthMm: 23.44 }])[0]!
    expect(finding.spread).toBeCloseTo(0.08, 9)
    expect(finding).toMatchObject({ answer: 'warn', readings: 3 })
  })
})
