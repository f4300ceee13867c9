import {
  decimalFromLogMar, lettersFromLogMar, logMarFromFraction, logMarPerLetter, logMarPerLine, lowVisionOf, roundLogMar,
} from '#shared/domain/review/acuity-scale'
import type { RecordedAcuity } from '#shared/domain/review/vocabulary'

export const shownNotations = ['metres', 'feet', 'decimal', 'logmar', 'letters'] as const
export type ShownNotation = typeof shownNotations[number]

/** Lines of the usual charts, distance then line. */
const metreLines: readonly (readonly [number, number])[] = [
  [6, 3], [6, 4], [6, 5], [6, 6], [6, 7.5], [6, 9], [6, 12], [6, 18], [6, 24], [6, 36], [6, 60], [5, 60], [4, 60], [3, 60], [2, 60], [1, 60],
]
const footLines: readonly (readonly [number, number])[] = [
  10, 12.5, 15, 16, 20, 25, 30, 40, 50, 60, 70, 80, 100, 120, 160, 200, 240, 300, 400, 500, 600, 800, 1000, 1200, 1600, 2000,
].map(line => [20, line] as const)

/**
 * Writes a logMAR in the notation asked for. Low vision has no chart value in any notation and is always written as
 * its word (CF, HM, PL, NPL). Snellen is the nearest line with the letters more or fewer, so that reading it back
 * gives the same logMAR within one letter (0.02).
 */
export function formatAcuity(logMar: number, notation: ShownNotation): string {
  const word = lowVisionOf(logMar)
  if (word) return word
  switch (notation) {
    case 'metres': return formatFraction(logMar, metreLines, 6)
    case 'feet': return formatFraction(logMar, footLines, 20)
    case 'decimal': return decimalFromLogMar(logMar).toFixed(logMar > 1 ? 3 : 2)
    case 'logmar': return `${roundLogMar(logMar).toFixed(2)} logMAR`
    case 'letters': return logMar > 1.7 ? '0 letters' : `${Math.round(lettersFromLogMar(logMar))} letters`
  }
}

function formatFraction(logMar: number, lines: readonly (readonly [number, number])[], distance: number): string {
  let nearest = lines[0]!
  for (const line of lines) {
    if (Math.abs(logMarFromFraction(...line) - logMar) < Math.abs(logMarFromFraction(...nearest) - logMar)) nearest = line
  }
  const letters = Math.round((logMar - logMarFromFraction(...nearest)) / logMarPerLetter)
  if (Math.abs(letters) > 4) return `${distance}/${Number((distance * 10 ** logMar).toPrecision(3))}`
  const suffix = letters === 0 ? '' : letters > 0 ? `-${letters}` : `+${-letters}`
  return `${nearest[0]}/${nearest[1]}${suffix}`
}

export interface AcuityChange {
  direction: 'better' | 'worse' | 'same'
  /** logMAR after minus before: positive is worse. */
  logMarChange: number
  /** Lines of 0.1 logMAR, without sign. */
  lines: number
  /** Letters of 0.02 logMAR, without sign. */
  letters: number
  /** False within one line, which is within what repeating the test gives (DICOM PS3.17 RR.2.4). */
  meaningful: boolean
  /** True when a low vision word is in it, whose number is a convention. */
  conventional: boolean
}

/** What changed between two acuities, in the order of time. */
export function compareAcuity(before: Pick<RecordedAcuity, 'logMar'>, after: Pick<RecordedAcuity, 'logMar'>): AcuityChange {
  const logMarChange = roundLogMar(after.logMar - before.logMar)
  const size = Math.abs(logMarChange)
  return {
    direction: logMarChange === 0 ? 'same' : logMarChange > 0 ? 'worse' : 'better',
    logMarChange,
    lines: Math.round(size / logMarPerLine * 10) / 10,
    letters: Math.round(size / logMarPerLetter * 10) / 10,
    meaningful: size >= logMarPerLine - 1e-9,
    conventional: [before, after].some(acuity => lowVisionOf(acuity.logMar) !== undefined),
  }
}

/**
 * Whether acuity fell by at least `byLogMar`. 0.48 - 0.18 is 0.29999 in floating point, so the comparison is made
 * in hundredths; a doubling of the visual angle therefore always counts as 0.30.
 */
export function isWorseBy(beforeLogMar: number, afterLogMar: number, byLogMar: number): boolean {
  return Math.round((afterLogMar - beforeLogMar) * 100) >= Math.round(byLogMar * 100)
}

/** The better of unaided and pinhole; undefined when neither was recorded. */
export function bestAcuity(findings: { acuityUnaided?: RecordedAcuity, acuityPinhole?: RecordedAcuity }): RecordedAcuity | undefined {
  const { acuityUnaided, acuityPinhole } = findings
  if (acuityUnaided && acuityPinhole) return acuityPinhole.logMar < acuityUnaided.logMar ? acuityPinhole : acuityUnaided
  return acuityUnaided ?? acuityPinhole
}

/** Mean of acuities: of their logMAR, never of decimals (Holladay 1997, J Refract Surg 13:388-391). */
export function meanAcuity(acuities: readonly Pick<RecordedAcuity, 'logMar'>[]): { logMar: number, conventional: number } | undefined {
  if (acuities.length === 0) return undefined
  const total = acuities.reduce((sum, acuity) => sum + acuity.logMar, 0)
  return { logMar: total / acuities.length, conventional: acuities.filter(acuity => lowVisionOf(acuity.logMar)).length }
}
