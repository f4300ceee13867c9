import { describe, expect, it } from 'vitest'
import { checkPlausibility } from '#shared/domain/biometry/plausibility'
import { checkRepeatability } from '#shared/domain/biometry/repeatability'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'

/** Near the means of adult eyes in ten countries: 23.49 mm, 7.69 mm = 43.89 D, 3.10 mm, 4.37 mm, 11.80 mm (Eye, Global metrics on ocular biometry). */
const usual: EyeBiometry = { eye: 'right', axialLengthMm: 23.49, axialLengthSdMm: 0.02, k1D: 43.5, k1AxisDegrees: 180, k2D: 44.25, k2AxisDegrees: 90, anteriorChamberDepthMm: 3.1, lensThicknessMm: 4.37, whiteToWhiteMm: 11.8 }
const fellowOf = (change: Partial<EyeBiometry> = {}): EyeBiometry => ({ ...usual, eye: 'left', axialLengthMm: 23.45, k1D: 43.4, ...change })
const warned = (eye: EyeBiometry, fellow?: EyeBiometry) => checkPlausibility(eye, fellow).warnings.map(each => each.ruleId)

/** [field change, rule or nothing]; limits are inclusive. */
type Row = [string, Partial<EyeBiometry>, string | undefined]

describe('one eye', () => {
  it('finds nothing unusual in the mean adult eye', () => {
    expect(checkPlausibility(usual).verdict).toBe('pass')
    expect(checkPlausibility(usual, fellowOf()).verdict).toBe('pass')
  })

  /** Knox Cartwright et al., Eye 2010;24:894-900, 55 567 operations (numbers from memory). */
  it.each<Row>([
    ['21.30 mm', { axialLengthMm: 21.3 }, undefined], ['21.29 mm', { axialLengthMm: 21.29 }, 'axial-length.unusual'],
    ['26.60 mm', { axialLengthMm: 26.6 }, undefined], ['26.61 mm', { axialLengthMm: 26.61 }, 'axial-length.unusual'],
    ['mean K 41.00', { k1D: 40.5, k2D: 41.5 }, undefined], ['mean K 40.99', { k1D: 40.49, k2D: 41.49 }, 'cornea.mean-unusual'],
    ['mean K 47.00', { k1D: 46.5, k2D: 47.5 }, undefined], ['mean K 47.01', { k1D: 46.51, k2D: 47.51 }, 'cornea.mean-unusual'],
    ['2.50 D of astigmatism', { k1D: 42.5, k2D: 45 }, undefined], ['2.51 D of astigmatism', { k1D: 42.5, k2D: 45.01 }, 'cornea.astigmatism-large'],
  ])('%s against the audit of 55 567 operations', (_, change, rule) => {
    expect(warned({ ...usual, ...change })).toEqual(rule ? [rule] : [])
  })

  /** Mean ± 3 SD: chamber 3.10 ± 0.47, lens 4.37 ± 0.43, white to white 11.80 ± 0.42 mm (Eye, Global metrics on ocular biometry). */
  it.each<Row>([
    ['chamber 1.69', { anteriorChamberDepthMm: 1.69 }, undefined], ['chamber 1.68', { anteriorChamberDepthMm: 1.68 }, 'chamber-depth.unusual'],
    ['chamber 4.51', { anteriorChamberDepthMm: 4.51 }, undefined], ['chamber 4.52', { anteriorChamberDepthMm: 4.52 }, 'chamber-depth.unusual'],
    ['lens 3.08', { lensThicknessMm: 3.08 }, undefined], ['lens 3.07', { lensThicknessMm: 3.07 }, 'lens-thickness.unusual'],
    ['lens 5.66', { lensThicknessMm: 5.66 }, undefined], ['lens 5.67', { lensThicknessMm: 5.67 }, 'lens-thickness.unusual'],
    ['diameter 10.54', { whiteToWhiteMm: 10.54 }, undefined], ['diameter 10.53', { whiteToWhiteMm: 10.53 }, 'white-to-white.unusual'],
    ['diameter 13.06', { whiteToWhiteMm: 13.06 }, undefined], ['diameter 13.07', { whiteToWhiteMm: 13.07 }, 'white-to-white.unusual'],
  ])('%s mm against the population of ten countries', (_, change, rule) => {
    expect(warned({ ...usual, ...change })).toEqual(rule ? [rule] : [])
  })

  /** Common practice, and DICOM PS3.3 C.8.25.10 for the right angle. */
  it.each<Row>([
    ['SD 0.05 mm', { axialLengthSdMm: 0.05 }, undefined], ['SD 0.06 mm', { axialLengthSdMm: 0.06 }, 'axial-length.readings-differ'],
    ['meridians 80 apart', { k1AxisDegrees: 10 }, undefined], ['meridians 79 apart', { k1AxisDegrees: 11 }, 'cornea.meridians-not-square'],
    ['meridians 79 apart across 180', { k1AxisDegrees: 169 }, 'cornea.meridians-not-square'],
    ['a nearly round cornea with any meridians', { k2D: 43.9, k1AxisDegrees: 60 }, undefined],
    ['K1 equal to K2', { k2D: 43.5 }, undefined], ['K1 steeper than K2', { k1D: 44.5 }, 'cornea.k1-steeper'],
    ['index 1.3315', { keratometricIndex: 1.3315 }, undefined], ['index 1.3600', { keratometricIndex: 1.36, k1D: 46.4, k2D: 47.2 }, 'index.unusual'],
    ['10 mm behind the lens', { axialLengthMm: 21.3, anteriorChamberDepthMm: 4.5, lensThicknessMm: 5.6 }, undefined],
  ])('%s', (_, change, rule) => {
    expect(warned({ ...usual, ...change })).toEqual(rule ? [rule] : [])
  })
  it('finds that three lengths do not add up', () => {
    expect(warned({ ...usual, axialLengthMm: 18, anteriorChamberDepthMm: 4, lensThicknessMm: 5 })).toEqual(['axial-length.unusual', 'lengths.do-not-add-up'])
  })
})

describe('two eyes', () => {
  it.each<Row>([
    // Holladay et al. 1988 (number from memory): 0.3 mm.
    ['0.30 mm longer', { axialLengthMm: 23.79 }, undefined], ['0.31 mm longer', { axialLengthMm: 23.8 }, 'eyes.length-differs'],
    // Knox Cartwright et al. 2010 (number from memory): 0.92 D.
    ['0.92 D steeper and longer', { axialLengthMm: 23.65, k1D: 44.42, k2D: 45.17 }, 'eyes.lens-power-differs'], ['0.92 D steeper, but shorter', { k1D: 44.42, k2D: 45.17, axialLengthMm: 23.45 }, undefined], ['0.93 D steeper', { k1D: 44.43, k2D: 45.18 }, 'eyes.cornea-differs'],
    // Holladay et al. 1988 (number from memory): emmetropic power 1 D.
    ['0.25 mm and 0.6 D', { axialLengthMm: 23.74, k1D: 44.1, k2D: 44.85 }, 'eyes.lens-power-differs'], ['0.25 mm and -0.6 D', { axialLengthMm: 23.74, k1D: 42.9, k2D: 43.65 }, undefined],
    // Shammas and Chan 2010 for the chamber; the rest common practice or proposed.
    ['chamber 0.30 mm deeper', { anteriorChamberDepthMm: 3.4 }, undefined], ['chamber 0.31 mm deeper', { anteriorChamberDepthMm: 3.41 }, 'eyes.chamber-differs'],
    ['lens 0.50 mm thicker', { lensThicknessMm: 4.87 }, undefined], ['lens 0.51 mm thicker', { lensThicknessMm: 4.88 }, 'eyes.lens-thickness-differs'],
    ['diameter 0.5 mm larger', { whiteToWhiteMm: 12.3 }, undefined], ['diameter 0.9 mm larger', { whiteToWhiteMm: 12.7 }, 'eyes.white-to-white-differs'],
    ['another index', { keratometricIndex: 1.336 }, 'eyes.index-differs'],
    ['length, K1 and K2 typed twice', { axialLengthMm: 23.49, k1D: 43.5, k2D: 44.25 }, 'eyes.values-copied'],
  ])('%s', (_, change, rule) => {
    const fellow = fellowOf({ k1D: 43.5, ...change })
    expect(warned(usual, fellow)).toEqual(rule ? [rule] : [])
  })
})

describe('repeated readings of one eye', () => {
  /** 95 % limits of test and retest, 121 eyes a month apart: 0.06 mm, 0.55 D, 0.2 mm (J Cataract Refract Surg 2010;36:1474-1478). */
  it.each<Row>([
    ['length 0.06 mm apart', { axialLengthMm: 23.55 }, undefined], ['length 0.07 mm apart', { axialLengthMm: 23.56 }, 'repeat.axial-length'],
    ['K1 0.55 D apart', { k1D: 42.95 }, undefined], ['K1 0.56 D apart', { k1D: 42.94 }, 'repeat.k1'],
    ['K2 0.55 D apart', { k2D: 44.8 }, undefined], ['K2 0.56 D apart', { k2D: 44.81 }, 'repeat.k2'],
    ['chamber 0.2 mm apart', { anteriorChamberDepthMm: 3.3 }, undefined], ['chamber 0.21 mm apart', { anteriorChamberDepthMm: 3.31 }, 'repeat.chamber-depth'],
    ['steep meridian 10 degrees apart', { k2AxisDegrees: 100 }, undefined], ['steep meridian 11 degrees apart', { k2AxisDegrees: 101 }, 'repeat.steep-meridian'],
  ])('%s', (_, change, rule) => {
    expect(checkRepeatability([usual, { ...usual, ...change }]).filter(each => each.answer === 'warn').map(each => each.ruleId)).toEqual(rule ? [rule] : [])
  })
  it('counts meridians of 178 and 2 degrees as 4 apart', () => {
    const finding = checkRepeatability([{ ...usual, k2AxisDegrees: 178 }, { ...usual, k2AxisDegrees: 2 }]).find(each => each.ruleId === 'repeat.steep-meridian')!
    expect(finding).toMatchObject({ answer: 'pass', spread: 4 })
  })
})
