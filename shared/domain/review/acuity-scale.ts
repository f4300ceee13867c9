/**
 * The arithmetic of visual acuity: logMAR, decimal, letters, lines, and the words used where no chart can be read.
 *
 * Sources. logMAR = -log10(decimal): DICOM PS3.17 Annex RR; Holladay 2004, J Cataract Refract Surg 30:287-290.
 * Letters = 85 + 50 log10(decimal): Gregori, Feuer, Rosenfeld 2010, Retina 30:1046-1050. One line is 5 letters or
 * 0.1 logMAR: Holladay 2004.
 */

export const logMarPerLetter = 0.02
export const logMarPerLine = 0.1
/** 6/3. Nobody is expected to read better, so better is a slip of the keys. */
export const bestChartLogMar = -0.3
/** 20/2000. Worse than this no chart is used; the words below are. */
export const worstChartLogMar = 2

export const lowVisions = ['CF', 'HM', 'PL', 'NPL'] as const
/** Counts fingers, hand movements, perception of light, no perception of light. Best first. */
export type LowVision = typeof lowVisions[number]

/**
 * The logMAR that stands for each word. Published tables disagree (CF 1.85 to 2.10, HM 2.28 to 3.0), so the table is
 * named and the word typed is kept beside the number. This one is the substitution of United Kingdom cataract
 * audits, so that our outcomes compare with theirs. CF and HM have been measured elsewhere (1.98 and 2.28, Lange et
 * al. 2009, Graefes Arch 247:137-142); PL and NPL never were: their values only keep the order, and a mean that
 * holds them must say so.
 */
export const lowVisionEquivalents = {
  id: 'uk-cataract',
  source: 'Day AC et al. 2015, Eye 29:552-560 (values from memory)',
  logMar: { CF: 2.1, HM: 2.4, PL: 2.7, NPL: 3 },
} as const satisfies { id: string, source: string, logMar: Readonly<Record<LowVision, number>> }

export const lowVisionLabels: Readonly<Record<LowVision, string>> = {
  CF: 'Counts fingers',
  HM: 'Hand movements',
  PL: 'Light only',
  NPL: 'No light',
}

/** Rounds to 0.01 logMAR (half a letter), the precision in which acuity is stored. Never returns -0. */
export function roundLogMar(logMar: number): number {
  return Math.round(logMar * 100 + 1e-9) / 100 + 0
}

/** logMAR (exact) of a decimal acuity above 0. */
export function logMarFromDecimal(decimal: number): number {
  return -Math.log10(decimal) + 0
}

/** Decimal acuity (exact) of a logMAR. */
export function decimalFromLogMar(logMar: number): number {
  return 10 ** -logMar
}

/** logMAR (exact) of a chart read at `distance` down to the line made for `lineDistance`, same unit, both above 0. */
export function logMarFromFraction(distance: number, lineDistance: number): number {
  return logMarFromDecimal(distance / lineDistance)
}

/** logMAR of a letter score, 0 to 100. */
export function logMarFromLetters(letters: number): number {
  return 1.7 - logMarPerLetter * letters
}

/** Letter score, unrounded; below 0 when acuity is worse than the letter chart reaches. */
export function lettersFromLogMar(logMar: number): number {
  return (1.7 - logMar) / logMarPerLetter
}

/** The low vision word whose equivalent this is, if any. */
export function lowVisionOf(logMar: number): LowVision | undefined {
  return lowVisions.find(word => Math.abs(lowVisionEquivalents.logMar[word] - logMar) < 0.005)
}
