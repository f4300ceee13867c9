import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { identifierFrom, identifierProblem, isNhsNumber, nhsCheckDigit } from '#shared/domain/patient/identifier'

describe('the check digit of an NHS number', () => {
  // Worked by hand from the algorithm: 9x10+4x9+3x8+4x7+7x6+6x5+5x4+9x3+1x2 = 299; 299 mod 11 = 2; 11 - 2 = 9.
  // 943 476 5919 is the example that the NHS prints on its own pages (from memory).
  test('fits the printed example', () => {
    expect(nhsCheckDigit('943476591')).toBe(9)
    expect(isNhsNumber('9434765919')).toBe(true)
  })
  test('a remainder of 0 gives 0, a remainder of 1 is never issued', () => {
    // 1x10 + 6x2 = 22, remainder 0; 6x2 = 12, remainder 1.
    expect(nhsCheckDigit('100000006')).toBe(0)
    expect(nhsCheckDigit('000000006')).toBeUndefined()
  })
  test('any one mistyped digit and any two swapped neighbours are found', () => {
    fc.assert(fc.property(fc.stringMatching(/^[1-9]\d{8}$/), fc.nat(9), fc.integer({ min: 1, max: 9 }), (nine, at, by) => {
      const last = nhsCheckDigit(nine)
      fc.pre(last !== undefined && isNhsNumber(`${nine}${last}`))
      const good = [...`${nine}${last}`]
      const mistyped = good.with(at, String((Number(good[at]) + by) % 10)).join('')
      expect(isNhsNumber(mistyped)).toBe(false)
      const next = (at + 1) % 9
      const first = Math.min(at, next)
      if (first + 1 < 10 && good[first] !== good[first + 1]) expect(isNhsNumber(good.with(first, good[first + 1] ?? '').with(first + 1, good[first] ?? '').join(''))).toBe(false)
    }))
  })
  test('one digit ten times is nobody’s number', () => {
    expect(isNhsNumber('1111111111')).toBe(false)
  })
})

test('an identifier is compared without what groups its digits', () => {
  expect(identifierFrom('943 476-5919')).toBe('9434765919')
  expect(identifierFrom('  ')).toBeNull()
  expect(identifierFrom('ab 12')).toBe('AB12')
})

test('a site that does not check takes any identifier; one that does says what is wrong', () => {
  expect(identifierProblem('X1', 'none')).toBeUndefined()
  expect(identifierProblem(null, 'nhs-number')).toBeUndefined()
  expect(identifierProblem('943476591', 'nhs-number')).toMatchObject({ code: 'wrong-form', field: 'identifier' })
  expect(identifierProblem('9434765918', 'nhs-number', 'patient.identifier')).toMatchObject({ code: 'check-digit', field: 'patient.identifier' })
})
