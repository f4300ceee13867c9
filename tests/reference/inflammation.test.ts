import { describe, expect, it } from 'vitest'
import { cellGradeOf, exceedsExpected, hyphaemaGradeOf, inflammationTrend } from '#shared/domain/review/inflammation'
import type { CellGrade } from '#shared/domain/review/vocabulary'

describe('anterior chamber', () => {
  // SUN Working Group 2005, Am J Ophthalmol 140:509-516: <1, 1-5, 6-15, 16-25, 26-50, >50 cells in 1 mm by 1 mm.
  it.each([[0, '0'], [1, '0.5+'], [5, '0.5+'], [6, '1+'], [15, '1+'], [16, '2+'], [25, '2+'], [26, '3+'], [50, '3+'], [51, '4+'], [400, '4+']])('%d cells are %s', (count, grade) => {
    expect(cellGradeOf(count)).toBe(grade)
  })

  // The trial scale of J Ophthalmic Inflamm Infect 2011;1:147-155 puts 6-15 cells at 2 and 16-30 at 3; SUN must not.
  it.each([[10, '1+'], [28, '3+'], [31, '3+']])('%d cells are graded by SUN, not by the trial scale', (count, grade) => {
    expect(cellGradeOf(count)).toBe(grade)
  })

  // SUN 2005 activity words, from memory.
  it.each([['1+', '3+', 'worsening'], ['3+', '4+', 'worsening'], ['2+', '3+', 'steady'], ['3+', '1+', 'improving'], ['0.5+', '0', 'improving'], ['0', '0', 'inactive'], ['2+', '1+', 'steady'], ['0', '1+', 'worsening']] as [CellGrade, CellGrade, string][])('%s then %s is %s', (before, after, trend) => {
    expect(inflammationTrend(before, after)).toBe(trend)
  })

  // Shares of the chamber: I under 1/3, II 1/3 to 1/2, III 1/2 to under total, IV total (clinical sources; the exact bounds are a convention).
  it.each([[0, 'none'], [0.2, 'I'], [0.33, 'I'], [1 / 3, 'II'], [0.49, 'II'], [0.5, 'III'], [0.99, 'III'], [1, 'IV']])('blood filling %d is %s', (share, grade) => {
    expect(hyphaemaGradeOf(share)).toBe(grade)
  })

  // Day one: 0.5+ to 2+ cells and 0 to 2+ flare are ordinary, 3+ is not (common practice); flare back by one month (Singapore trial).
  it.each([[1, '2+', '2+', false, false], [1, '3+', '3+', true, true], [7, '2+', '1+', true, false], [27, '1+', '1+', false, false], [28, '1+', '1+', true, true], [28, '0.5+', '0', false, false]] as const)('day %d with cells %s and flare %s: more than expected %s, %s', (day, cells, flare, more, moreFlare) => {
    expect(exceedsExpected({ cells, flare }, day)).toEqual({ cells: more, flare: moreFlare })
  })
})
