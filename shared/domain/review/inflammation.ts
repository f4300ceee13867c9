import { DomainError } from '#shared/domain/errors'
import { cellGrades, flareGrades } from '#shared/domain/review/vocabulary'
import type { CellGrade, FlareGrade, HyphaemaGrade } from '#shared/domain/review/vocabulary'

/**
 * Grading of the anterior chamber: SUN Working Group 2005, Am J Ophthalmol 140:509-516, in a field of 1 mm by 1 mm,
 * before dilating drops; pigment and red cells are not counted. Other scales use the same names for other counts
 * (trial scale, J Ophthalmic Inflamm Infect 2011;1:147-155: 2 is 6 to 15 cells), so the scale is named with the grade.
 */
export const inflammationScale = 'SUN 2005'

interface CellRange { grade: CellGrade, from: number, to: number }

/** Whole cells in the field. SUN has no 1.5+ or 2.5+. */
export const cellRanges: readonly CellRange[] = [
  { grade: '0', from: 0, to: 0 },
  { grade: '0.5+', from: 1, to: 5 },
  { grade: '1+', from: 6, to: 15 },
  { grade: '2+', from: 16, to: 25 },
  { grade: '3+', from: 26, to: 50 },
  { grade: '4+', from: 51, to: Number.POSITIVE_INFINITY },
]

/** What the review sheet shows beside each grade. */
export const inflammationGradeDefinitions = {
  cells: {
    '0': 'Fewer than 1 cell in a 1 mm beam',
    '0.5+': '1 to 5 cells',
    '1+': '6 to 15 cells',
    '2+': '16 to 25 cells',
    '3+': '26 to 50 cells',
    '4+': 'More than 50 cells',
  },
  flare: {
    '0': 'None',
    '1+': 'Faint, just seen',
    '2+': 'Moderate, iris and lens clear',
    '3+': 'Marked, iris and lens hazy',
    '4+': 'Intense, fibrin present',
  },
  hyphaema: {
    none: 'No blood',
    micro: 'Red cells floating, no layer',
    I: 'Layer up to a third of the chamber',
    II: 'A third to a half',
    III: 'Half or more, not all',
    IV: 'All of the chamber',
  },
} as const satisfies { cells: Record<CellGrade, string>, flare: Record<FlareGrade, string>, hyphaema: Record<HyphaemaGrade, string> }

/**
 * SUN grade of a count of cells in one 1 mm field.
 * @throws DomainError `review.cell-count-invalid` for anything but a whole number from 0 up
 */
export function cellGradeOf(count: number): CellGrade {
  const range = Number.isSafeInteger(count) ? cellRanges.find(({ from, to }) => count >= from && count <= to) : undefined
  if (range) return range.grade
  const message = 'Enter the cells in one 1 mm field as a whole number, 0 or more.'
  throw new DomainError('review.cell-count-invalid', message, { fields: [{ field: 'cells', code: 'out-of-range', message, limit: '0 or more' }] })
}

/** Fewest and most cells of a grade; `to` is endless for 4+. */
export function cellCountsOf(grade: CellGrade): { from: number, to: number } {
  const { from, to } = cellRanges[cellGrades.indexOf(grade)]!
  return { from, to }
}

/** Steps of the scale between two gradings: positive is worse. */
export function cellSteps(before: CellGrade, after: CellGrade): number {
  return cellGrades.indexOf(after) - cellGrades.indexOf(before)
}

export function flareSteps(before: FlareGrade, after: FlareGrade): number {
  return flareGrades.indexOf(after) - flareGrades.indexOf(before)
}

export function isCellGradeAtLeast(grade: CellGrade, least: CellGrade): boolean {
  return cellSteps(least, grade) >= 0
}

export type InflammationTrend = 'worsening' | 'improving' | 'inactive' | 'steady'

/**
 * SUN 2005 activity words (from memory): worsening is a rise of two steps, or from 3+ to 4+; improving a fall of two steps, or to 0;
 * inactive is grade 0 that stays 0.
 */
export function inflammationTrend(before: CellGrade, after: CellGrade): InflammationTrend {
  const steps = cellSteps(before, after)
  if (steps >= 2 || (steps > 0 && after === '4+')) return 'worsening'
  if (after === '0') return steps === 0 ? 'inactive' : 'improving'
  return steps <= -2 ? 'improving' : 'steady'
}

export interface ExpectedInflammation {
  /** Days after surgery for which the row holds; surgery day is 0. */
  fromDay: number
  toDay: number
  /** The most that routine surgery leaves. */
  mostCells: CellGrade
  mostFlare: FlareGrade
  source: string
}

/**
 * What is ordinary after routine surgery. Activity is highest about one hour after and falls (Shehata, 20 eyes); flare is back to its level
 * before surgery by about one month after phacoemulsification (Singapore trial). The grades per day are common
 * practice and proposed; a clinical lead signs them. Nothing here makes a finding safe: the escalation rules decide.
 */
export const expectedInflammation: readonly ExpectedInflammation[] = [
  { fromDay: 0, toDay: 6, mostCells: '2+', mostFlare: '2+', source: 'common practice: 0.5+ to 2+ cells and up to 2+ flare on day one' },
  { fromDay: 7, toDay: 27, mostCells: '1+', mostFlare: '1+', source: 'proposed' },
  { fromDay: 28, toDay: Number.POSITIVE_INFINITY, mostCells: '0.5+', mostFlare: '0', source: 'flare back to its pre-operative level by about one month; proposed' },
]

/**
 * The row for a day after surgery.
 * @throws DomainError `review.day-invalid` before surgery or for a part of a day
 */
export function expectedInflammationOn(daysAfterSurgery: number): ExpectedInflammation {
  const row = Number.isSafeInteger(daysAfterSurgery) ? expectedInflammation.find(({ fromDay, toDay }) => daysAfterSurgery >= fromDay && daysAfterSurgery <= toDay) : undefined
  if (row) return row
  throw new DomainError('review.day-invalid', 'Days are counted from surgery, whole, 0 or more.', { fields: [{ field: 'daysAfterSurgery', code: 'out-of-range', message: 'Enter whole days from surgery, 0 or more.' }] })
}

/** Whether what was graded is more than that day's row. Ungraded is undefined, never "no". */
export function exceedsExpected(findings: { cells?: CellGrade, flare?: FlareGrade }, daysAfterSurgery: number): { cells?: boolean, flare?: boolean } {
  const { mostCells, mostFlare } = expectedInflammationOn(daysAfterSurgery)
  return {
    ...(findings.cells === undefined ? {} : { cells: cellSteps(mostCells, findings.cells) > 0 }),
    ...(findings.flare === undefined ? {} : { flare: flareSteps(mostFlare, findings.flare) > 0 }),
  }
}

/**
 * Grade of layered blood by the share of the chamber it fills, 0 to 1; exactly a third is II and exactly a half III
 * (convention fixed here). Floating red cells without a layer are `micro` and are graded by eye.
 * @throws DomainError `review.hyphaema-invalid`
 */
export function hyphaemaGradeOf(filledShare: number): Exclude<HyphaemaGrade, 'micro'> {
  if (!(filledShare >= 0 && filledShare <= 1)) {
    throw new DomainError('review.hyphaema-invalid', 'The filled share of the chamber is from 0 to 1.', { fields: [{ field: 'hyphaema', code: 'out-of-range', message: 'Enter a share from 0 to 1.' }] })
  }
  if (filledShare === 0) return 'none'
  if (filledShare < 1 / 3) return 'I'
  if (filledShare < 1 / 2) return 'II'
  return filledShare < 1 ? 'III' : 'IV'
}
