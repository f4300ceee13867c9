import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { DomainError } from '#shared/domain/errors'
import { parseAcuity, readAcuity } from '#shared/domain/review/acuity'
import { bestAcuity, compareAcuity, formatAcuity, isWorseBy, meanAcuity, shownNotations } from '#shared/domain/review/acuity-format'
import { lowVisionEquivalents, lowVisions } from '#shared/domain/review/acuity-scale'

function refusal(text: string): DomainError {
  try {
    readAcuity(text, { field: 'acuityUnaided' })
  }
  catch (error) {
    if (error instanceof DomainError) return error
    throw error
  }
  throw new Error(`${text} was accepted`)
}

describe('reading acuity', () => {
  it.each([
    ['6/9', 0.18], [' 6 / 9 ', 0.18], ['6/9-2', 0.22], ['6/9 -2', 0.22], ['6/9−2', 0.22], ['6⁄9', 0.18], ['6/9+1', 0.16], ['20/30+1', 0.16],
    ['6/7,5', 0.1], ['0.2 logMAR', 0.2], ['logMAR 0.2', 0.2], ['0.2LOGMAR', 0.2], ['-0.1 logMAR', -0.1], ['+0,3 logmar', 0.3], ['.5 logMAR', 0.5],
    ['70 letters', 0.3], ['70L', 0.3], ['70 ETDRS', 0.3], ['ETDRS 70', 0.3], ['ETDRS70', 0.3], ['1 letter', 1.68], ['70 lets', 0.3], ['70 ltr', 0.3], ['70 ETDRS letters', 0.3], ['logMAR:.25', 0.25], ['logmar -0.1', -0.1], ['log mar 1', 1], ['0 letters', 1.7], ['3/60', 1.3], ['6/3', -0.3], ['20/2000', 2],
    ['0.8', 0.1], ['1.0', 0], ['0,5', 0.3], ['1.2', -0.08],
  ])('reads %s as %d', (text, logMar) => {
    expect(parseAcuity(text)).toEqual({ logMar, entered: text.trim().replace(/\s+/g, ' ') })
  })

  it.each([
    ['CF', 'CF'], ['c.f.', 'CF'], ['counting fingers', 'CF'], ['Counts fingers', 'CF'], ['CF 1m', 'CF'], ['CF @ 30 cm', 'CF'], ['CF 0.5m', 'CF'], ['CF1m', 'CF'], ['CF at 2 ft', 'CF'], ['count fingers', 'CF'], ['countsfingers', 'CF'], ['hand movement', 'HM'], ['hand motions', 'HM'], ['PL (poor projection)', 'PL'], ['PL proj', 'PL'], ['no perception', 'NPL'], ['no light', 'NPL'], ['No PL', 'NPL'], ['counting fingers at 1 metre', 'CF'],
    ['HM', 'HM'], ['hand movements', 'HM'], ['Hand Motion', 'HM'], ['PL', 'PL'], ['LP', 'PL'], ['perception of light', 'PL'], ['Light only', 'PL'],
    ['PL with good projection', 'PL'], ['NPL', 'NPL'], ['NLP', 'NPL'], ['no perception of light', 'NPL'], ['No light perception', 'NPL'],
  ] as const)('reads %s as %s and keeps the words', (text, lowVision) => {
    expect(readAcuity(text)).toEqual({ notation: 'low-vision', lowVision, acuity: { logMar: lowVisionEquivalents.logMar[lowVision], entered: text } })
  })

  it('warns that a bare decimal could have been logMAR, and keeps it', () => {
    expect(readAcuity('0.8')).toMatchObject({ notation: 'decimal', doubt: '0.8 is read as decimal, about 6/7.5. If you mean logMAR, enter "0.8 logMAR".' })
    expect(readAcuity('6/9').doubt).toBeUndefined()
  })

  it.each([
    ['6', '6/9', '6/6', '6 letters'], ['1', '1.0', '1 logMAR', '1/60'], ['70', '6/70', '70 letters'], ['20', '20/30', '20 letters'], ['0', 'NPL', '6/6'],
    ['-0.1', '"-0.1 logMAR"'], ['0.0', '0.0 logMAR'], ['9/6', 'Did you mean 6/9?'], ['6/9p', '6/9-2'], ['6/9 part', '6/9-2'], ['6/9-', '6/9-2'], ['N5', 'near vision'],
    ['10 letters 6/9', 'not understood'], ['logMAR', 'not understood'], ['0.2 logMAR 6/9', 'not understood'], ['x 0.2 logMAR', 'not understood'], ['70 lettersx', 'not understood'],
    ['CFx', 'not understood'], ['not CF', 'not understood'], ['HMx', 'not understood'], ['no HM', 'not understood'], ['PL?x', 'not understood'], ['maybe PL', 'not understood'], ['NPLx', 'not understood'], ['a NPL', 'not understood'],
    ['2', '2/60', '"2.0" for decimal'], ['3', '3/60', '"3 letters"'], ['5', '5/60', '6/5'], ['12', '6/12', '"12 letters"'], ['120', 'Enter 6/120.'], ['121', 'Enter 6/9,'], ['7/6', 'up to 6 metres, or 20 feet'], ['9/7', 'up to 6 metres'],
    ['NI', 'same value'], ['6/9 PH', 'box each'], ['6/9-6/12', 'not one value'], ['good', 'Enter 6/9'],
  ])('refuses %s as unclear and says what to enter', (text, ...says) => {
    const error = refusal(text)
    expect(error.code).toBe('review.acuity-unclear')
    expect(error.fields).toEqual([{ field: 'acuityUnaided', code: 'unclear', message: error.message }])
    for (const words of says) expect(error.message).toContain(words)
  })

  it.each(['20/6', '6/2', '6/0', '0/6', '6/9-5', '6/9+9', '3 logMAR', '-0.4 logMAR', '101 letters', '1/300', '9.5', '0.001', '6/99999'])('refuses %s as out of range', (text) => {
    expect(refusal(text).code).toBe('review.acuity-out-of-range')
  })

  it('never suggests what it would refuse', () => {
    for (let value = 0; value <= 130; value++) {
      const quoted = [...refusal(String(value)).message.matchAll(/"([^"]+)"|\b(\d+\/\d+(?:\.\d+)?)/g)].map(match => match[1] ?? match[2] ?? '')
      for (const suggestion of quoted) expect(() => readAcuity(suggestion), `${value}: ${suggestion}`).not.toThrow()
    }
  })

  it('says the limit that was passed', () => {
    expect(refusal('6/2').fields).toEqual([{ field: 'acuityUnaided', code: 'out-of-range', message: '6/2 is better than 6/3, the best that is recorded. Check the numbers.', limit: '6/3' }])
    expect(refusal('1/300').fields[0]).toMatchObject({ message: '1/300 is beyond any chart. Enter CF, HM, PL or NPL.', limit: '2.0 logMAR' })
    expect(refusal('101 letters').fields[0]).toMatchObject({ message: '101 letters: a letter score is 0 to 100.', limit: '100 letters' })
    expect(refusal('6/9-5').fields[0]).toMatchObject({ message: '6/9-5: 1 to 4 letters can follow a line; five letters are a whole line.', limit: '4 letters' })
    expect(refusal('6/9-0').fields[0]).toMatchObject({ limit: '4 letters' })
    expect(refusal('6/9-12').fields[0]).toMatchObject({ limit: '4 letters' })
    expect(refusal('6/0').message).toBe('6/0: neither number can be 0.')
  })

  it('names how an entry was understood', () => {
    expect(['6/9', '20/30', '0.8', '0.2 logMAR', '70 letters', 'CF'].map(text => readAcuity(text).notation)).toEqual(['metres', 'feet', 'decimal', 'logmar', 'letters', 'low-vision'])
  })

  it('refuses nothing as required, not as full sight', () => {
    expect(refusal('  ').code).toBe('review.acuity-required')
  })

  it('answers any text with a finite value in range or a typed refusal', () => {
    fc.assert(fc.property(fc.oneof(fc.string(), fc.stringMatching(/^[0-9/.,+\- logMARCFHPNLtes]{0,12}$/)), (text) => {
      try {
        const { logMar } = parseAcuity(text)
        return Number.isFinite(logMar) && logMar >= -0.3 && logMar <= 3
      }
      catch (error) {
        return error instanceof DomainError && error.code.startsWith('review.acuity-') && error.fields.length === 1
      }
    }), { numRuns: 2000 })
  })
})

describe('writing acuity', () => {
  it.each([
    [0.18, '6/9', '20/30', '0.66', '0.18 logMAR', '76 letters'], [0.22, '6/9-2', '20/30-2', '0.60', '0.22 logMAR', '74 letters'],
    [0, '6/6', '20/20', '1.00', '0.00 logMAR', '85 letters'], [1, '6/60', '20/200', '0.10', '1.00 logMAR', '35 letters'], [2.4, 'HM', 'HM', 'HM', 'HM', 'HM'],
  ] as const)('writes %d in every notation', (logMar, ...shown) => {
    expect(shownNotations.map(notation => formatAcuity(logMar, notation))).toEqual(shown)
  })

  it('reads back what it wrote within one letter, in every notation', () => {
    fc.assert(fc.property(fc.integer({ min: -30, max: 170 }), fc.constantFrom(...shownNotations), (hundredths, notation) => {
      const written = formatAcuity(hundredths / 100, notation)
      return Math.abs(parseAcuity(written).logMar - hundredths / 100) < 0.0201
    }), { numRuns: 1000 })
  })

  it.each(['6/3', '6/4', '6/5', '6/6', '6/7.5', '6/9', '6/12', '6/18', '6/24', '6/36', '6/60', '5/60', '4/60', '3/60', '2/60', '1/60', '6/9-2', '6/6-2', '6/18+4'])('writes the line %s as it was read', (line) => {
    expect(formatAcuity(parseAcuity(line).logMar, 'metres')).toBe(line)
  })

  it('writes what no line is near as the exact fraction, and letters that cannot be read as none', () => {
    expect(formatAcuity(1.63, 'metres')).toBe('6/256')
    expect(formatAcuity(1.8, 'letters')).toBe('0 letters')
    expect(formatAcuity(1.7, 'letters')).toBe('0 letters')
  })

  it('reads low vision back exactly', () => {
    for (const word of lowVisions) expect(parseAcuity(formatAcuity(lowVisionEquivalents.logMar[word], 'metres')).logMar).toBe(lowVisionEquivalents.logMar[word])
  })
})

describe('comparing acuity', () => {
  it('says better or worse, by lines and letters', () => {
    expect(compareAcuity(parseAcuity('6/24'), parseAcuity('6/12'))).toEqual({ direction: 'better', logMarChange: -0.3, lines: 3, letters: 15, meaningful: true, conventional: false })
    expect(compareAcuity(parseAcuity('6/9'), parseAcuity('6/9-2'))).toMatchObject({ direction: 'worse', letters: 2, meaningful: false })
    expect(compareAcuity(parseAcuity('6/60'), parseAcuity('HM'))).toMatchObject({ direction: 'worse', conventional: true })
    expect(compareAcuity(parseAcuity('6/12'), parseAcuity('20/40')).direction).toBe('same')
    expect(compareAcuity({ logMar: 0.2 }, { logMar: 0.3 })).toMatchObject({ meaningful: true, lines: 1 })
    expect(compareAcuity({ logMar: 0.2 }, { logMar: 0.29 })).toMatchObject({ meaningful: false, lines: 0.9 })
  })

  it('is the same size both ways and never NaN', () => {
    const acuity = fc.integer({ min: -30, max: 300 }).map(value => ({ logMar: value / 100 }))
    fc.assert(fc.property(acuity, acuity, (a, b) => {
      const there = compareAcuity(a, b)
      const back = compareAcuity(b, a)
      expect(there.lines).toBe(back.lines)
      expect(there.logMarChange + back.logMarChange).toBeCloseTo(0, 9)
      expect(Number.isNaN(there.letters)).toBe(false)
    }))
  })

  it('counts every doubling of the visual angle as 0.3 or more', () => {
    expect(isWorseBy(0.18, 0.48, 0.3)).toBe(true)
    expect(isWorseBy(0.3, 0.58, 0.3)).toBe(false)
    fc.assert(fc.property(fc.double({ min: 3, max: 250, noNaN: true }), line =>
      isWorseBy(parseAcuity(`6/${line.toFixed(4)}`).logMar, parseAcuity(`6/${(2 * Number(line.toFixed(4))).toFixed(4)}`).logMar, 0.3)))
  })

  it('takes the better of unaided and pinhole, and nothing from nothing', () => {
    const acuityUnaided = parseAcuity('6/24')
    const acuityPinhole = parseAcuity('6/9')
    expect(bestAcuity({ acuityUnaided, acuityPinhole })).toBe(acuityPinhole)
    expect(bestAcuity({ acuityUnaided })).toBe(acuityUnaided)
    expect(bestAcuity({ acuityUnaided: acuityPinhole, acuityPinhole: acuityUnaided })).toBe(acuityPinhole)
    expect(bestAcuity({ acuityPinhole })).toBe(acuityPinhole)
    expect(bestAcuity({})).toBeUndefined()
    expect(meanAcuity([])).toBeUndefined()
    expect(meanAcuity([parseAcuity('CF'), parseAcuity('6/6')])?.conventional).toBe(1)
  })
})
