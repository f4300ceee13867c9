import { DomainError } from '#shared/domain/errors'
import type { FoldGrade, OedemaGrade } from '#shared/domain/review/vocabulary'

/** What the review sheet shows beside each grade. The 0 to 4 scale of oedema is common practice. */
export const corneaGradeDefinitions = {
  oedema: {
    0: 'Clear',
    1: 'Faint haze, iris detail sharp',
    2: 'Folds, iris detail soft',
    3: 'Dense, only pupil edge seen',
    4: 'Opaque, no view in',
  },
  folds: {
    none: 'None',
    few: 'Fewer than 10',
    many: '10 or more',
  },
} as const satisfies { oedema: Record<OedemaGrade, string>, folds: Record<FoldGrade, string> }

export const corneaLimits = {
  thicknessUm: { least: 300, most: 1200 },
  endothelialCellsPerMm2: { least: 200, most: 5000 },
} as const

function assertWithin(value: number, field: string, limits: { least: number, most: number }, unit: string): void {
  if (Number.isFinite(value) && value >= limits.least && value <= limits.most) return
  const limit = `${limits.least} to ${limits.most} ${unit}`
  const message = `Enter ${limit}.`
  throw new DomainError('review.cornea-out-of-range', message, { fields: [{ field, code: 'out-of-range', message, limit }] })
}

/**
 * Swelling of the cornea in per cent of its thickness before surgery; positive is thicker. Same eye, same instrument.
 * Undefined when either was not measured: not computable is not zero.
 * @throws DomainError `review.cornea-out-of-range` outside 300 to 1200 micrometres
 */
export function thicknessChangePercent(beforeUm: number | undefined, afterUm: number | undefined): number | undefined {
  if (beforeUm === undefined || afterUm === undefined) return undefined
  assertWithin(beforeUm, 'preoperativeCctUm', corneaLimits.thicknessUm, 'micrometres')
  assertWithin(afterUm, 'cctUm', corneaLimits.thicknessUm, 'micrometres')
  return 100 * (afterUm - beforeUm) / beforeUm
}

/**
 * Endothelial cells lost in per cent of those before surgery; positive is loss, negative more cells than before
 * (within what repeating the count gives). Undefined when either was not counted.
 * @throws DomainError `review.cornea-out-of-range` outside 200 to 5000 cells per square millimetre
 */
export function endothelialLossPercent(beforePerMm2: number | undefined, afterPerMm2: number | undefined): number | undefined {
  if (beforePerMm2 === undefined || afterPerMm2 === undefined) return undefined
  assertWithin(beforePerMm2, 'preoperativeCellsPerMm2', corneaLimits.endothelialCellsPerMm2, 'cells per mm²')
  assertWithin(afterPerMm2, 'cellsPerMm2', corneaLimits.endothelialCellsPerMm2, 'cells per mm²')
  return 100 * (beforePerMm2 - afterPerMm2) / beforePerMm2
}

export interface OedemaClearing {
  /** Endothelial cells lost at three months, in per cent, on average. */
  lossAtThreeMonthsPercent: number
  /** Days until clear, mean and standard deviation, where reported. */
  meanDays?: number
  sdDays?: number
}

/** "Corneal endothelial damage and its repair after phacoemulsification", 105 eyes, by the grade seen after surgery. */
export const oedemaClearing: Readonly<Record<OedemaGrade, OedemaClearing>> = {
  0: { lossAtThreeMonthsPercent: 4.6 },
  1: { lossAtThreeMonthsPercent: 14.9, meanDays: 2.1, sdDays: 0.7 },
  2: { lossAtThreeMonthsPercent: 40.8, meanDays: 5.6, sdDays: 1.9 },
  3: { lossAtThreeMonthsPercent: 67.0, meanDays: 21.8, sdDays: 7.1 },
  4: { lossAtThreeMonthsPercent: 84.4 },
}

/**
 * Day by which nearly all corneas of a grade were clear: mean plus two standard deviations, in whole days. 0 for a
 * clear cornea, undefined for grade 4 (not reported).
 */
export function expectedClearByDay(grade: OedemaGrade): number | undefined {
  if (grade === 0) return 0
  const { meanDays, sdDays } = oedemaClearing[grade]
  return meanDays === undefined || sdDays === undefined ? undefined : Math.round(meanDays + 2 * sdDays)
}

/** Published mean swelling in per cent after routine surgery (Cornea 2018;37(5), 85 eyes, 2.2 mm incision), by day. */
export const publishedSwelling: readonly { day: number, meanPercent: number }[] = [
  { day: 0, meanPercent: 8.39 },
  { day: 4, meanPercent: 1.8 },
  { day: 15, meanPercent: 0.1 },
]

/**
 * Whether oedema has outlasted what its first grade led one to expect. Undefined when the series says nothing about
 * that grade. The escalation rules, not this, decide who is told.
 */
export function outlastsExpectation(firstGrade: OedemaGrade, gradeNow: OedemaGrade, daysAfterSurgery: number): boolean | undefined {
  if (gradeNow === 0) return false
  const clearBy = expectedClearByDay(firstGrade)
  return clearBy === undefined ? undefined : daysAfterSurgery > clearBy
}
