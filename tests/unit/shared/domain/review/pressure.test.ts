import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { DomainError } from '#shared/domain/errors'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import { pressureBandIndex, pressureConcern, pressureDoubt, pressureLimitFor, pressureUnchecked } from '#shared/domain/review/pressure'
import type { PressureFacts } from '#shared/domain/review/pressure'
import { pressureBands, pressureGradeDefinitions } from '#shared/domain/review/pressure-bands'
import { chamberDepths, oedemaGrades, riskReasons, seidelResults } from '#shared/domain/review/vocabulary'

const rank = (facts: PressureFacts) => {
  const concern = pressureConcern(facts)
  return concern ? urgencies.length - urgencies.indexOf(concern.urgency) : 0
}

const facts = fc.record({
  iopMmHg: fc.integer({ min: 0, max: 80 }),
  riskReasons: fc.subarray([...riskReasons]),
  preoperativeIopMmHg: fc.option(fc.integer({ min: 8, max: 40 }), { nil: undefined }),
  daysAfterSurgery: fc.option(fc.integer({ min: 0, max: 60 }), { nil: undefined }),
  onSteroidDrops: fc.option(fc.boolean(), { nil: undefined }),
  seidel: fc.option(fc.constantFrom(...seidelResults), { nil: undefined }),
  chamberDepth: fc.option(fc.constantFrom(...chamberDepths), { nil: undefined }),
  painScore: fc.option(fc.integer({ min: 0, max: 10 }), { nil: undefined }),
  vomiting: fc.option(fc.boolean(), { nil: undefined }),
  oedemaGrade: fc.option(fc.constantFrom(...oedemaGrades), { nil: undefined }),
})

describe('pressure', () => {
  it('says why in the words of the sheet', () => {
    expect(pressureConcern({ iopMmHg: 34, riskReasons: ['steroid-response'], preoperativeIopMmHg: 26 })).toEqual({
      urgency: 'today', band: 'high',
      reasons: [{ id: 'pressure.raised', urgency: 'today', sentence: '30 to 34 mmHg, eye at risk (known steroid response).', source: 'Wills Eye Manual, 8th edition; proposed' }],
    })
    expect(pressureConcern({ iopMmHg: 31, riskReasons: [], painScore: 6, vomiting: true })?.reasons.map(reason => reason.sentence)).toEqual(['30 to 34 mmHg.', '30 mmHg or more with pain 6 of 10, vomiting.'])
    expect(pressureConcern({ iopMmHg: 26, riskReasons: [], preoperativeIopMmHg: 15.5 })?.reasons[0]).toMatchObject({ id: 'pressure.rise', sentence: 'Risen by 10.5 mmHg since before surgery, so it counts as 30 to 34 mmHg.' })
    expect(pressureConcern({ iopMmHg: 23, riskReasons: ['glaucoma'] })).toMatchObject({ recheckWithinHours: 48 })
  })

  it('says each reason in a sentence of its own, with its source', () => {
    const reasons = (facts: PressureFacts) => pressureConcern(facts)?.reasons.map(({ id, sentence, source }) => ({ id, sentence, source }))
    expect(reasons({ iopMmHg: 4, riskReasons: ['glaucoma'] })).toEqual([{ id: 'pressure.low', sentence: '5 mmHg or less.', source: 'proposed; 5 mmHg as hypotony is the commonest definition' }])
    expect(reasons({ iopMmHg: 7, riskReasons: [], chamberDepth: 'flat' })).toMatchObject([{ id: 'pressure.low', sentence: '6 to 7 mmHg, with a leak or a shallow chamber.' }])
    expect(reasons({ iopMmHg: 33, riskReasons: ['glaucoma', 'only-eye'], oedemaGrade: 3 })).toEqual([
      { id: 'pressure.raised', sentence: '30 to 34 mmHg, eye at risk (glaucoma, only seeing eye).', source: 'Wills Eye Manual, 8th edition; proposed' },
      { id: 'pressure.symptoms', sentence: '30 mmHg or more with corneal oedema 3.', source: 'proposed' },
    ])
    expect(reasons({ iopMmHg: 29, riskReasons: [], preoperativeIopMmHg: 21, daysAfterSurgery: 20, onSteroidDrops: true })?.[1]).toEqual(
      { id: 'pressure.steroid-response', sentence: 'Day 20 on steroid drops, 29 mmHg, more than 25 % above 21 mmHg before surgery: steroid response.', source: 'Chang, Tan, Tripodis 2011' })
    // The row alone raises nothing here, the steroid rule does.
    expect(pressureConcern({ iopMmHg: 30, riskReasons: [], preoperativeIopMmHg: 16, daysAfterSurgery: 14, onSteroidDrops: true })?.reasons.map(reason => reason.id)).toEqual(['pressure.rise', 'pressure.steroid-response'])
  })

  it('has rows without a gap or an overlap from 0 to 80', () => {
    for (let iop = 0; iop <= 80; iop++) expect(pressureBands.filter(band => band.fromMmHg <= iop && iop <= band.toMmHg)).toHaveLength(1)
    fc.assert(fc.property(fc.double({ min: 0, max: 80, noNaN: true }), iop => pressureBandIndex(iop) >= 0))
  })

  it('reads a value between rows in the lower row', () => {
    expect(pressureBands[pressureBandIndex(7.5)]?.id).toBe('low')
    expect(pressureBands[pressureBandIndex(29.5)]?.id).toBe('raised')
  })

  it.each([-1, 80.1, 300, Number.NaN, Number.POSITIVE_INFINITY])('refuses %d mmHg', (iopMmHg) => {
    const message = 'Enter a pressure from 0 to 80 mmHg, or leave it blank if it was not measured.'
    expect(() => pressureConcern({ iopMmHg, riskReasons: [] })).toThrow(expect.objectContaining({ name: 'DomainError', code: 'review.pressure-out-of-range', fields: [{ field: 'iopMmHg', code: 'out-of-range', message, limit: '0 to 80 mmHg' }] }) as DomainError)
  })

  it('asks again outside 4 to 60', () => {
    expect([3, 4, 60, 61].map(iop => pressureDoubt(iop) !== undefined)).toEqual([true, false, false, true])
    expect(pressureDoubt(70)).toBe('70 mmHg is rare. Measure again, then confirm it.')
  })

  it('never lowers the urgency for a worse fact', () => {
    fc.assert(fc.property(facts, (base) => {
      const before = rank(base)
      expect(rank({ ...base, riskReasons: [...riskReasons] })).toBeGreaterThanOrEqual(before)
      expect(rank({ ...base, painScore: 10 })).toBeGreaterThanOrEqual(before)
      expect(rank({ ...base, vomiting: true })).toBeGreaterThanOrEqual(before)
      expect(rank({ ...base, oedemaGrade: 4 })).toBeGreaterThanOrEqual(before)
      expect(rank({ ...base, seidel: 'spontaneous' })).toBeGreaterThanOrEqual(before)
      expect(rank({ ...base, chamberDepth: 'flat' })).toBeGreaterThanOrEqual(before)
      if (base.iopMmHg >= 8 && base.iopMmHg < 80) expect(rank({ ...base, iopMmHg: base.iopMmHg + 1 })).toBeGreaterThanOrEqual(before)
    }), { numRuns: 1000 })
  })

  it('agrees with a second computation written as plain comparisons', () => {
    fc.assert(fc.property(facts, (f) => {
      const risk = f.riskReasons.length > 0
      const leak = f.seidel === 'spontaneous' || f.chamberDepth === 'shallow' || f.chamberDepth === 'flat'
      const steps = [22, 25, 30, 35, 40].filter(limit => f.iopMmHg >= limit).length
      const row = Math.min(5, steps + (f.preoperativeIopMmHg !== undefined && f.iopMmHg - f.preoperativeIopMmHg >= 10 ? 1 : 0))
      let expected = (risk ? [0, 1, 1, 2, 3, 3] : [0, 0, 1, 2, 2, 3])[row]!
      if (f.iopMmHg < 6) expected = leak ? 3 : 2
      else if (f.iopMmHg < 8) expected = leak ? 2 : 1
      if (f.iopMmHg >= 30 && ((f.painScore ?? 0) >= 4 || f.vomiting || (f.oedemaGrade ?? 0) >= 2)) expected = 3
      if (f.onSteroidDrops && (f.daysAfterSurgery ?? 0) >= 14 && f.iopMmHg >= 28 && f.preoperativeIopMmHg !== undefined && 4 * f.iopMmHg > 5 * f.preoperativeIopMmHg) expected = Math.max(expected, 2)
      expect(rank(f)).toBe(expected)
    }), { numRuns: 3000 })
  })

  it('names what was not recorded instead of reading it as normal', () => {
    expect(pressureUnchecked({ iopMmHg: 5, riskReasons: [], seidel: 'not-done' })).toEqual(['the rise since before surgery', 'a wound leak', 'the depth of the chamber'])
    expect(pressureUnchecked({ iopMmHg: 32, riskReasons: [], preoperativeIopMmHg: 15, daysAfterSurgery: 20 })).toEqual(['pain', 'vomiting', 'corneal oedema', 'steroid drops'])
    expect(pressureUnchecked({ iopMmHg: 16, riskReasons: [], preoperativeIopMmHg: 15 })).toEqual([])
    const base = { riskReasons: [], preoperativeIopMmHg: 15 }
    expect(pressureUnchecked({ ...base, iopMmHg: 7 })).toEqual(['a wound leak', 'the depth of the chamber'])
    expect(pressureUnchecked({ ...base, iopMmHg: 7, seidel: 'negative', chamberDepth: 'deep' })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 7, woundLeaking: false, chamberDepth: 'deep' })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 8 })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 30 })).toEqual(['pain', 'vomiting', 'corneal oedema'])
    expect(pressureUnchecked({ ...base, iopMmHg: 30, painScore: 0, vomiting: false, oedemaGrade: 0 })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 28, daysAfterSurgery: 14 })).toEqual(['steroid drops'])
    expect(pressureUnchecked({ ...base, iopMmHg: 28, daysAfterSurgery: 14, onSteroidDrops: false })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 28, daysAfterSurgery: 13 })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 27, daysAfterSurgery: 30 })).toEqual([])
    expect(pressureUnchecked({ ...base, iopMmHg: 28 })).toEqual([])
  })

  it('knows from which pressure this eye is urgent', () => {
    expect(pressureLimitFor('today', [])).toBe(30)
    expect(pressureLimitFor('now', [])).toBe(40)
    expect(pressureLimitFor('now', ['only-eye'])).toBe(35)
    expect(pressureLimitFor('this-week', ['only-eye'])).toBe(22)
  })

  it('defines every row in words', () => {
    expect(pressureGradeDefinitions(true).map(row => `${row.range}: ${row.words}`)).toEqual([
      '5 mmHg or less: Today; now with a leak or a shallow chamber', '6 to 7 mmHg: This week, measure again in 24 to 48 hours; today with a leak or a shallow chamber',
      '8 to 21 mmHg: Nothing is raised', '22 to 24 mmHg: This week, measure again in 24 to 48 hours', '25 to 29 mmHg: This week, measure again in 24 to 48 hours',
      '30 to 34 mmHg: Today', '35 to 39 mmHg: Now', '40 mmHg or more: Now',
    ])
    expect(pressureGradeDefinitions(false)[3]?.words).toBe('Nothing is raised')
  })
})
