import { DomainError } from '#shared/domain/errors'
import type { RecordedAcuity } from '#shared/domain/review/vocabulary'
import {
  bestChartLogMar, logMarFromDecimal, logMarFromFraction, logMarFromLetters, logMarPerLetter, lowVisionEquivalents,
  roundLogMar, worstChartLogMar,
} from '#shared/domain/review/acuity-scale'
import type { LowVision } from '#shared/domain/review/acuity-scale'

export const acuityNotations = ['metres', 'feet', 'decimal', 'logmar', 'letters', 'low-vision'] as const
export type AcuityNotation = typeof acuityNotations[number]

export interface AcuityReading {
  acuity: RecordedAcuity
  /** How the entry was understood. */
  notation: AcuityNotation
  lowVision?: LowVision
  /** What to look at again, when the entry could have meant something else. The value stands unless changed. */
  doubt?: string
}

interface ReadOptions {
  /** The form field that a refusal names. */
  field?: string
}

const lowVisionPatterns: readonly (readonly [LowVision, RegExp])[] = [
  ['NPL', /^(?:npl|nlp|no pl|no lp|no perception(?: of light)?|no light(?: perception)?|no light at all)$/],
  ['PL', /^(?:pl|lp|perception of light|light perception|light only)(?: (?:with |\()?(?:good |poor |accurate |inaccurate )?proj(?:ection)?\)?)?$/],
  ['HM', /^(?:hm|hand (?:movements?|motions?))$/],
  ['CF', /^(?:cf|fc|count(?:s|ing)? ?fingers|finger counting)$/],
]
/** `CF 1m`, `HM at 30 cm`: the distance stays in the record as typed; the equivalents know no distance. */
const trailingDistance = / ?(?:@|at|from)? ?\d+(?:\.\d+)? ?(?:cm|m|metres?|ft|feet)$/

/** Distances at which charts are read: metres to 6, feet for 10 and above. */
const metreDistances = [0.5, 1, 1.5, 2, 3, 4, 5, 6]
const footDistances = [10, 15, 20]

const whatToEnter = 'Enter 6/9, 6/9-2, 20/30, 0.8 (decimal), 0.2 logMAR, 70 letters, CF, HM, PL or NPL.'

function refuse(field: string, kind: 'required' | 'unclear' | 'out-of-range', message: string, limit?: string): never {
  throw new DomainError(`review.acuity-${kind}`, message, { fields: [{ field, code: kind, message, ...(limit ? { limit } : {}) }] })
}

/**
 * Reads what a clinician types as visual acuity.
 *
 * logMAR is stored to 0.01; `entered` keeps the words. Letters after a Snellen line count 0.02 logMAR each (common
 * practice; DICOM PS3.17 RR.2.3 notes that traditional charts define no value, hence the words are kept).
 *
 * @throws DomainError `review.acuity-required` for nothing, `review.acuity-unclear` when the entry can be read in
 * more than one way or not at all, `review.acuity-out-of-range` beyond 6/3 or beyond any chart.
 */
export function readAcuity(text: string, options: ReadOptions = {}): AcuityReading {
  const field = options.field ?? 'acuity'
  const entered = text.trim().replace(/\s+/g, ' ')
  if (entered === '') refuse(field, 'required', `No acuity was entered. ${whatToEnter}`)
  const plain = entered.toLowerCase().normalize('NFKC').replace(/[\u2010-\u2015\u2212]/g, '-').replace(/\u2044/g, '/').replace(/(\d),(\d)/g, '$1.$2')
  const reading = readLowVision(plain)
    ?? readFraction(plain, field) ?? readLogMar(plain, field) ?? readLetters(plain, field) ?? readBareNumber(plain, field)
  if (!reading) refuseKnownSlips(plain, entered, field)
  const { logMar, ...understood } = reading
  return { ...understood, acuity: { logMar, entered } }
}

/** As `readAcuity`, for callers that need only the record. */
export function parseAcuity(text: string, options: ReadOptions = {}): RecordedAcuity {
  return readAcuity(text, options).acuity
}

interface Understood { logMar: number, notation: AcuityNotation, lowVision?: LowVision, doubt?: string }

function readLowVision(plain: string): Understood | undefined {
  const words = plain.replace(trailingDistance, '').replace(/\./g, '').trim()
  const found = lowVisionPatterns.find(([, pattern]) => pattern.test(words))
  return found && { logMar: lowVisionEquivalents.logMar[found[0]], notation: 'low-vision', lowVision: found[0] }
}

function withinChart(logMar: number, field: string, shown: string): number {
  const rounded = roundLogMar(logMar)
  if (rounded < bestChartLogMar) refuse(field, 'out-of-range', `${shown} is better than 6/3, the best that is recorded. Check the numbers.`, '6/3')
  if (rounded > worstChartLogMar) refuse(field, 'out-of-range', `${shown} is beyond any chart. Enter CF, HM, PL or NPL.`, '2.0 logMAR')
  return rounded
}

function readFraction(plain: string, field: string): Understood | undefined {
  const match = /^(\d+(?:\.\d+)?) ?\/ ?(\d+(?:\.\d+)?) ?(?:([+-]) ?(\d+)|(p|part|partly|\+|-))?$/.exec(plain)
  if (!match) return undefined
  const distance = Number(match[1])
  const line = Number(match[2])
  const shown = `${match[1]}/${match[2]}`
  const notation = footDistances.includes(distance) ? 'feet' : 'metres'
  if (line === 0 || distance === 0) refuse(field, 'out-of-range', `${shown}: neither number can be 0.`)
  if (notation === 'metres' && !metreDistances.includes(distance)) {
    const swapped = metreDistances.includes(line) && distance > line ? ` Did you mean ${match[2]}/${match[1]}?` : ''
    refuse(field, 'unclear', `${shown}: the first number is the distance of the chart, up to 6 metres, or 20 feet.${swapped}`)
  }
  if (match[5]) refuse(field, 'unclear', `${shown} ${match[5]}: say how many letters, for example ${shown}-2 for two letters missed or ${shown}+1 for one more.`)
  const letters = match[4] ? Number(match[4]) : 0
  if (match[4] && (letters < 1 || letters > 4)) {
    refuse(field, 'out-of-range', `${plain}: 1 to 4 letters can follow a line; five letters are a whole line.`, '4 letters')
  }
  const worse = match[3] === '-' ? letters : -letters
  return { logMar: withinChart(logMarFromFraction(distance, line) + worse * logMarPerLetter, field, plain), notation }
}

function readLogMar(plain: string, field: string): Understood | undefined {
  const match = /^(?:log ?mar:? ?([+-]?\d*\.?\d+)|([+-]?\d*\.?\d+) ?log ?mar)$/.exec(plain)
  if (!match) return undefined
  return { logMar: withinChart(Number(match[1] ?? match[2]), field, plain), notation: 'logmar' }
}

function readLetters(plain: string, field: string): Understood | undefined {
  const match = /^(?:etdrs ?(\d+)|(\d+) ?(?:l|lets?|letters?|ltrs?|etdrs(?: letters)?))$/.exec(plain)
  if (!match) return undefined
  const letters = Number(match[1] ?? match[2])
  if (letters > 100) refuse(field, 'out-of-range', `${plain}: a letter score is 0 to 100.`, '100 letters')
  return { logMar: roundLogMar(logMarFromLetters(letters)), notation: 'letters' }
}

function readBareNumber(plain: string, field: string): Understood | undefined {
  if (!/^[+-]?\d*\.?\d+$/.test(plain)) return undefined
  const value = Number(plain)
  if (/^[+-]/.test(plain)) refuse(field, 'unclear', `${plain} alone is not enough. If it is logMAR enter "${plain} logMAR".`)
  if (/^\d+$/.test(plain)) refuseWholeNumber(value, field)
  if (value === 0) refuse(field, 'unclear', `${plain} alone is not enough. Enter 6/6 or "0.0 logMAR" for full sight, NPL for none.`)
  const logMar = withinChart(logMarFromDecimal(value), field, plain)
  const line = Number((6 / value).toPrecision(2))
  return { logMar, notation: 'decimal', doubt: `${plain} is read as decimal, about 6/${line}. If you mean logMAR, enter "${plain} logMAR".` }
}

function refuseWholeNumber(value: number, field: string): never {
  const choices = value === 0
    ? ['6/6 or "0.0 logMAR" for full sight', 'NPL for no light']
    : value <= 2
      ? [`"${value}.0" for decimal`, `"${value} logMAR"`, `${value}/60`]
      : [...(metreDistances.includes(value) ? [`the line as well, such as ${value}/${value === 6 ? 9 : 60}`] : []),
          ...(value > 3 && value <= 120 ? [`6/${value}`] : []), ...(value <= 100 ? [`"${value} letters"`] : []), ...(value === 20 ? ['20/30'] : [])]
  const enter = choices.length > 0 ? `Enter ${choices.join(', or ')}.` : whatToEnter
  refuse(field, 'unclear', `${value} alone can mean several things. ${enter}`)
}

/** Entries that people do make, each with its own way out. */
function refuseKnownSlips(plain: string, entered: string, field: string): never {
  if (/^n ?\d/.test(plain)) refuse(field, 'unclear', `${entered} is near vision. Enter distance vision here.`)
  if (/^(?:ni|no improvement)$/.test(plain)) refuse(field, 'unclear', 'No improvement: enter the same value as unaided.')
  if (/\b(?:ph|pinhole|cc|sc|gls|glasses)\b/.test(plain)) refuse(field, 'unclear', `${entered}: enter only the value; unaided and pinhole have a box each.`)
  if (/^\d.*-.*\d/.test(plain)) refuse(field, 'unclear', `${entered} is not one value. ${whatToEnter}`)
  refuse(field, 'unclear', `"${entered.slice(0, 40)}" is not understood. ${whatToEnter}`)
}
