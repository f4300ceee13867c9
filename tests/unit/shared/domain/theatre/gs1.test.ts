import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { checkDigitOf, groupSeparator, hasRightCheckDigit, readLensLabel, withCheckDigit } from '#shared/domain/theatre/gs1'

const today = '2026-10-15'
const gtin = '09506000134352'
const refusal = (code: string) => expect.objectContaining({ code: 'theatre.label-invalid', fields: [expect.objectContaining({ field: 'label', code })] })

describe('the check digit', () => {
  // GS1 General Specifications, section 7.9, modulo 10. Worked examples as GS1 publishes them (from memory): 629104150021 ends in 3,
  // the shipping container number 37610425002123456 in 9; 9506000134352 is GS1's own example item.
  it.each([['629104150021', 3], ['37610425002123456', 9], ['950600013435', 2], ['0950600013435', 2]])('of %s is %i', (digits, digit) => {
    expect(checkDigitOf(digits)).toBe(digit)
    expect(hasRightCheckDigit(`${digits}${digit}`)).toBe(true)
  })

  it('finds every single wrong digit', () => {
    fc.assert(fc.property(fc.stringMatching(/^\d{13}$/), fc.nat(13), fc.integer({ min: 1, max: 9 }), (digits, at, by) => {
      const right = withCheckDigit(digits)
      const wrong = [...right].map((digit, index) => index === at ? String((Number(digit) + by) % 10) : digit).join('')
      expect(hasRightCheckDigit(right)).toBe(true)
      expect(hasRightCheckDigit(wrong)).toBe(false)
    }))
  })
})

describe('a lens label', () => {
  const whole = { gtin, lot: 'AB-12', expiresOn: '2029-03-31', serial: '0042' }

  // Section 7.8: a part of fixed length needs no separator, a part of open length ends at FNC1 (typed as ASCII 29) or at the end.
  it.each([
    ['as a DataMatrix scanner types it', `]d2${'01'}${gtin}17290331${'10'}AB-12${groupSeparator}210042`],
    ['as a GS1-128 scanner types it, ended with Enter', `]C101${gtin}1729033110AB-12${groupSeparator}210042\r\n`],
    ['with FNC1 first and no symbol named', `${groupSeparator}01${gtin}1729033110AB-12${groupSeparator}210042`],
    ['with its parts in another order', `01${gtin}10AB-12${groupSeparator}210042${groupSeparator}17290331`],
    ['with a separator after a part of fixed length', `01${gtin}${groupSeparator}17290331${groupSeparator}10AB-12${groupSeparator}210042`],
    ['as people read it', `(01)${gtin}(17)290331(10)AB-12(21)0042`],
    ['as people type it', `  (01) ${gtin} (17) 290331 (10) AB-12 (21) 0042 `],
    ['with parts that no lens needs', `01${gtin}11260110172903313701${groupSeparator}10AB-12${groupSeparator}210042`],
  ])('is read %s', (_, typed) => {
    expect(readLensLabel(typed, today)).toEqual(whole)
  })

  it('needs only its item number', () => {
    expect(readLensLabel(`01${gtin}`, today)).toEqual({ gtin })
  })

  // Section 3.4.7: two zeros for the day mean the last of the month. Section 7.12: the century that is nearest to the present.
  it.each([['290200', '2029-02-28'], ['280200', '2028-02-29'], ['761231', '2076-12-31'], ['771231', '1977-12-31'], ['000101', '2000-01-01']])('reads the date %s as %s', (digits, day) => {
    expect(readLensLabel(`01${gtin}17${digits}`, today).expiresOn).toBe(day)
  })

  it('reads a date of the next century at the end of this one', () => {
    expect(readLensLabel(`01${gtin}17010630`, '2099-05-01').expiresOn).toBe('2101-06-30')
  })

  it.each([
    ['nothing', '  ', 'required'], ['only a lot', '10AB-12', 'required'], ['a wrong check digit', '0109506000134353', 'check-digit'], ['an item number cut short', '01095060001343', 'length'], ['letters in the item number', '01095060001A4352', 'characters'],
    ['a lot of 21 characters', `01${gtin}10${'A'.repeat(21)}`, 'length'], ['a part that is not known', `01${gtin}88123`, 'unknown-part'], ['a month of 13', `01${gtin}17291331`, 'date'], ['30 February', `01${gtin}17290230`, 'date'], ['brackets that do not fit', `(01)${gtin}(17`, 'length'],
    ['two item numbers', `01${gtin}0106291041500213`, 'repeated'], ['a character outside the set', `01${gtin}10AB£`, 'characters'], ['words', 'Monofocal +21.5', 'unknown-part'],
  ])('is refused for %s', (_, typed, code) => {
    expect(() => readLensLabel(typed, today)).toThrow(refusal(code))
  })

  it('never reads a lens out of what it refuses, whatever is typed', () => {
    fc.assert(fc.property(fc.string({ maxLength: 60 }), (typed) => {
      try {
        expect(hasRightCheckDigit(readLensLabel(typed, today).gtin)).toBe(true)
      }
      catch (error) {
        expect(error).toMatchObject({ code: 'theatre.label-invalid' })
      }
    }))
  })
})
