import { describe, expect, it } from 'vitest'
import { readAcuity } from '#shared/domain/review/acuity'
import { compareAcuity, formatAcuity, meanAcuity } from '#shared/domain/review/acuity-format'
import {
  decimalFromLogMar, lettersFromLogMar, logMarFromFraction, logMarFromLetters, lowVisionEquivalents,
} from '#shared/domain/review/acuity-scale'

/**
 * Source of the exact rows: logMAR = -log10(distance / line), DICOM PS3.17 Annex RR.2.2; letters = 85 + 50 log10(V),
 * Gregori et al. 2010, Retina 30:1046-1050. Values worked out outside this code to four places.
 */
const exact: [string, string, number, number, number][] = [
  ['6/3', '20/10', 2, -0.301, 100.05], ['6/3.75', '20/12.5', 1.6, -0.2041, 95.21], ['6/4.5', '20/15', 1.3333, -0.1249, 91.25],
  ['6/4.8', '20/16', 1.25, -0.0969, 89.85], ['6/6', '20/20', 1, 0, 85], ['6/7.5', '20/25', 0.8, 0.0969, 80.15],
  ['6/9', '20/30', 0.6667, 0.1761, 76.2], ['6/12', '20/40', 0.5, 0.301, 69.95], ['6/15', '20/50', 0.4, 0.3979, 65.1],
  ['6/18', '20/60', 0.3333, 0.4771, 61.14], ['6/18.9', '20/63', 0.3175, 0.4983, 60.08], ['6/21', '20/70', 0.2857, 0.5441, 57.8],
  ['6/24', '20/80', 0.25, 0.6021, 54.9], ['6/30', '20/100', 0.2, 0.699, 50.05], ['6/36', '20/120', 0.1667, 0.7782, 46.09],
  ['6/37.5', '20/125', 0.16, 0.7959, 45.21], ['6/48', '20/160', 0.125, 0.9031, 39.85], ['6/60', '20/200', 0.1, 1, 35],
  ['5/60', '20/240', 0.0833, 1.0792, 31.04], ['4/60', '20/300', 0.0667, 1.1761, 26.2], ['6/96', '20/320', 0.0625, 1.2041, 24.79],
  ['3/60', '20/400', 0.05, 1.301, 19.95], ['6/150', '20/500', 0.04, 1.3979, 15.1], ['2/60', '20/600', 0.0333, 1.4771, 11.14],
]

/** Nominal rows of DICOM PS3.17 table RR-1, in steps of 0.02 logMAR: they may differ from the exact value by up to 0.0071. */
const nominal: [string, string, number][] = [
  ['20/10', '6/3', -0.3], ['20/12.5', '6/3.8', -0.2], ['20/13', '6/4', -0.18], ['20/15', '6/4.5', -0.12], ['20/16', '6/4.8', -0.1],
  ['20/17', '6/5', -0.08], ['20/18', '6/5.5', -0.04], ['20/20', '6/6', 0], ['20/22', '6/6.6', 0.04], ['20/125', '6/38', 0.8],
  ['20/130', '6/40', 0.82], ['20/150', '6/45', 0.88], ['20/160', '6/48', 0.9], ['20/170', '6/50', 0.92], ['20/200', '6/60', 1],
  ['20/240', '6/72', 1.08], ['20/250', '6/75', 1.1], ['20/300', '6/90', 1.18], ['20/320', '6/95', 1.2], ['20/330', '6/100', 1.22],
  ['20/400', '6/120', 1.3], ['20/500', '6/150', 1.4], ['20/630', '6/190', 1.5], ['20/650', '6/200', 1.52],
]

describe('acuity against published conversions', () => {
  it.each(exact)('%s and %s are decimal %d, logMAR %d, letters %d', (metres, feet, decimal, logMar, letters) => {
    for (const text of [metres, feet]) {
      const [distance, line] = text.split('/').map(Number) as [number, number]
      const computed = logMarFromFraction(distance, line)
      expect(computed).toBeCloseTo(logMar, 4)
      expect(decimalFromLogMar(computed)).toBeCloseTo(decimal, 4)
      expect(lettersFromLogMar(computed)).toBeCloseTo(letters, 2)
      expect(Math.abs(readAcuity(text).acuity.logMar - logMar)).toBeLessThanOrEqual(0.00501)
    }
  })

  it.each(nominal)('DICOM RR-1: %s and %s are nominally %d', (feet, metres, logMar) => {
    expect(Math.abs(readAcuity(feet).acuity.logMar - logMar)).toBeLessThanOrEqual(0.0151)
    expect(Math.abs(readAcuity(metres).acuity.logMar - logMar)).toBeLessThanOrEqual(0.0151)
  })

  // logMAR = 1.7 - 0.02 letters: the inverse of Gregori et al. 2010, rounded constants of the letter chart.
  it.each([[100, -0.3], [95, -0.2], [90, -0.1], [85, 0], [84, 0.02], [80, 0.1], [70, 0.3], [69, 0.32], [55, 0.6], [50, 0.7], [36, 0.98], [35, 1], [20, 1.3], [5, 1.6], [0, 1.7]])('%d letters are logMAR %d', (letters, logMar) => {
    expect(logMarFromLetters(letters)).toBeCloseTo(logMar, 10)
    expect(readAcuity(`${letters} letters`).acuity.logMar).toBe(logMar)
  })

  // Agelis, Peh, Chen 2012, IOVS (abstract): letters expected for fully read 6/24, 6/12, 6/6.
  it.each([['6/24', '55 letters'], ['6/12', '70 letters'], ['6/6', '85 letters']])('%s is written as %s', (entered, letters) => {
    expect(formatAcuity(readAcuity(entered).acuity.logMar, 'letters')).toBe(letters)
  })

  it('averages logMAR: 20/20 and 20/200 give 20/63, not the 20/36 of averaged decimals', () => {
    // Holladay 1997, J Refract Surg 13:388-391.
    const mean = meanAcuity([readAcuity('20/20').acuity, readAcuity('20/200').acuity])
    expect(mean).toEqual({ logMar: 0.5, conventional: 0 })
    expect(20 / decimalFromLogMar(mean!.logMar)).toBeCloseTo(63.2, 1)
  })

  it('counts lines by 0.1 logMAR, a size ratio of 1.2589', () => {
    // Holladay 2004, J Cataract Refract Surg 30:287-290.
    expect(decimalFromLogMar(0) / decimalFromLogMar(0.1)).toBeCloseTo(1.2589, 4)
    expect(compareAcuity({ logMar: 0 }, { logMar: 0.3 })).toMatchObject({ direction: 'worse', lines: 3, letters: 15 })
  })

  it('keeps the order of published low vision tables and their measured neighbourhood', () => {
    // Measured: CF 1.98 (SD 0.24), HM 2.28 (SD 0.15), Lange et al. 2009, Graefes Arch 247:137-142.
    const { CF, HM, PL, NPL } = lowVisionEquivalents.logMar
    expect(Math.abs(CF - 1.98)).toBeLessThan(0.24)
    expect(Math.abs(HM - 2.28)).toBeLessThan(0.15)
    // The order NPL > PL > HM > CF > 1/60 holds in every published table (Bach 2007; Holladay 1997, from memory).
    expect([readAcuity('1/60').acuity.logMar, CF, HM, PL, NPL]).toEqual([1.78, 2.1, 2.4, 2.7, 3])
  })
})
