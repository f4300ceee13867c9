import { describe, expect, it } from 'vitest'
import { endothelialLossPercent, expectedClearByDay, oedemaClearing, publishedSwelling, thicknessChangePercent } from '#shared/domain/review/cornea'

describe('cornea', () => {
  // Definition: 100 x (after - before) / before. Worked outside this code.
  it.each([[545, 592, 8.62], [550, 605, 10], [530, 636, 20], [548, 549, 0.18]])('%d to %d micrometres is %d per cent thicker', (before, after, percent) => {
    expect(thicknessChangePercent(before, after)).toBeCloseTo(percent, 2)
  })

  // Definition: 100 x (before - after) / before. Worked outside this code.
  it.each([[2600, 2314, 11], [2500, 2250, 10], [1850, 1315, 28.92]])('%d to %d cells is a loss of %d per cent', (before, after, percent) => {
    expect(endothelialLossPercent(before, after)).toBeCloseTo(percent, 2)
  })

  // "Corneal endothelial damage and its repair after phacoemulsification", 105 eyes: means plus 2 SD are 3.5, 9.4, 36.0 days.
  it.each([[0, 0], [1, 4], [2, 9], [3, 36]] as const)('oedema %d is expected to be clear by day %d', (grade, day) => {
    expect(expectedClearByDay(grade)).toBe(day)
  })

  it('says nothing about when grade 4 clears, because the series does not', () => {
    expect(expectedClearByDay(4)).toBeUndefined()
  })

  // Same series: loss at 3 months 4.6, 14.9, 40.8, 67.0, 84.4 per cent rises with the grade.
  it('loses more cells with every grade', () => {
    expect(([0, 1, 2, 3, 4] as const).map(grade => oedemaClearing[grade].lossAtThreeMonthsPercent)).toEqual([4.6, 14.9, 40.8, 67, 84.4])
  })

  // Cornea 2018;37(5), 85 eyes: 46.68 micrometres are 8.39 %, 10 are 1.8 %; both go back to the same 556 before surgery.
  it('agrees with the micrometres printed beside the published per cents', () => {
    expect(thicknessChangePercent(556.4, 556.4 + 46.68)).toBeCloseTo(publishedSwelling[0]!.meanPercent, 1)
    expect(thicknessChangePercent(556.4, 556.4 + 10)).toBeCloseTo(publishedSwelling[1]!.meanPercent, 1)
  })
})
