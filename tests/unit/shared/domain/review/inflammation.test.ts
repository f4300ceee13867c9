import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { cellCountsOf, cellGradeOf, cellRanges, cellSteps, exceedsExpected, expectedInflammation, expectedInflammationOn, flareSteps, hyphaemaGradeOf, inflammationGradeDefinitions, inflammationTrend, isCellGradeAtLeast } from '#shared/domain/review/inflammation'
import { cellGrades, flareGrades, hyphaemaGrades } from '#shared/domain/review/vocabulary'

describe('inflammation', () => {
  it('goes from counts to grades and back', () => {
    fc.assert(fc.property(fc.nat({ max: 1000 }), (count) => {
      const { from, to } = cellCountsOf(cellGradeOf(count))
      return from <= count && count <= to
    }))
    for (const grade of cellGrades) expect(cellGradeOf(cellCountsOf(grade).from)).toBe(grade)
    expect(cellRanges.map(range => range.grade)).toEqual([...cellGrades])
  })

  it('never grades more cells lower', () => {
    fc.assert(fc.property(fc.nat({ max: 500 }), fc.nat({ max: 500 }), (a, b) => cellSteps(cellGradeOf(Math.min(a, b)), cellGradeOf(Math.max(a, b))) >= 0))
  })

  it.each([-1, 1.5, Number.NaN, Number.POSITIVE_INFINITY])('refuses a count of %d', (count) => {
    const message = 'Enter the cells in one 1 mm field as a whole number, 0 or more.'
    expect(() => cellGradeOf(count)).toThrow(expect.objectContaining({ name: 'DomainError', code: 'review.cell-count-invalid', message, fields: [{ field: 'cells', code: 'out-of-range', message, limit: '0 or more' }] }))
  })

  it('compares grades by their order, not by their letters', () => {
    expect(isCellGradeAtLeast('4+', '3+')).toBe(true)
    expect(isCellGradeAtLeast('0.5+', '1+')).toBe(false)
    expect(isCellGradeAtLeast('2+', '2+')).toBe(true)
    expect(inflammationTrend('4+', '4+')).toBe('steady')
    expect(flareSteps('1+', '4+')).toBe(3)
  })

  it('calls the way back of a worsening by two steps an improvement', () => {
    for (const before of cellGrades) for (const after of cellGrades) {
      if (cellSteps(before, after) >= 2) expect([inflammationTrend(before, after), inflammationTrend(after, before)]).toEqual(['worsening', 'improving'])
    }
  })

  it('has an expectation for every day, never rising with time', () => {
    fc.assert(fc.property(fc.nat({ max: 400 }), (day) => {
      const today = expectedInflammationOn(day)
      const tomorrow = expectedInflammationOn(day + 1)
      expect(cellSteps(today.mostCells, tomorrow.mostCells)).toBeLessThanOrEqual(0)
      expect(flareSteps(today.mostFlare, tomorrow.mostFlare)).toBeLessThanOrEqual(0)
    }))
    expect(expectedInflammation.every(row => row.source.length > 0)).toBe(true)
    expect(() => expectedInflammationOn(-1)).toThrow(expect.objectContaining({ code: 'review.day-invalid', fields: [{ field: 'daysAfterSurgery', code: 'out-of-range', message: 'Enter whole days from surgery, 0 or more.' }] }))
  })

  it('does not read what was not graded as ordinary', () => {
    expect(exceedsExpected({}, 1)).toEqual({})
    expect(exceedsExpected({ cells: '4+' }, 1)).toEqual({ cells: true })
  })

  it('refuses a share of blood outside 0 to 1', () => {
    for (const share of [-0.1, 1.1, Number.NaN]) expect(() => hyphaemaGradeOf(share)).toThrow(expect.objectContaining({ code: 'review.hyphaema-invalid', fields: [{ field: 'hyphaema', code: 'out-of-range', message: 'Enter a share from 0 to 1.' }] }))
  })

  it('defines every grade', () => {
    expect(Object.keys(inflammationGradeDefinitions.cells).sort()).toEqual([...cellGrades].sort())
    expect(Object.keys(inflammationGradeDefinitions.flare).sort()).toEqual([...flareGrades].sort())
    expect(Object.keys(inflammationGradeDefinitions.hyphaema).sort()).toEqual([...hyphaemaGrades].sort())
    // The words beside a cell grade hold the same numbers as the ranges that grade a count.
    for (const { grade, from, to } of cellRanges.slice(1, 5)) expect(inflammationGradeDefinitions.cells[grade]).toBe(`${from} to ${to} cells`)
  })
})
