import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import { defaultKeratometricIndex } from '#shared/domain/biometry/vocabulary'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'
import { eyes } from '#shared/domain/pathway/vocabulary'

type NumberField = Exclude<keyof EyeBiometry, 'eye'>

/** A span of numbers that nobody's eye has, but that a known slip gives. `eye` tells apart slips that share a span. */
interface MixUp {
  from: number
  to: number
  when?: (eye: EyeBiometry) => boolean
  words: (value: number) => string
}

export interface FieldLimit {
  label: string
  min: number
  max: number
  unit: string
  required: boolean
  mixUps: readonly MixUp[]
}

const within = (value: number | undefined, from: number, to: number) => value !== undefined && value >= from && value <= to
const shown = (value: number, digits = 2) => String(Number(value.toFixed(digits)))
const pointLeftOut = (divisor: number, unit: string) => (value: number) => `${shown(value)} looks as if the decimal point was left out: ${shown(value / divisor)} ${unit}?`
const micrometres = (value: number) => `${shown(value)} looks like micrometres. Enter millimetres: ${shown(value / 1000, 3)}.`
const centimetres = (value: number) => `${shown(value, 4)} looks like centimetres. Enter millimetres: ${shown(value * 10)}.`

const cornea: FieldLimit = {
  label: 'Corneal power', min: 30, max: 70, unit: 'D', required: true,
  mixUps: [
    { from: 5.5, to: 10.5, words: value => `${shown(value)} looks like a corneal radius in mm. Enter the power in dioptres: 337.5 / ${shown(value)} = ${shown(337.5 / value)} D.` },
    { from: 0.55, to: 1.05, words: value => `${shown(value, 3)} looks like a corneal radius in cm. Enter the power in dioptres: ${shown(33.75 / value)} D.` },
    { from: 14, to: 29.999, when: eye => within(eye.axialLengthMm, 36, 60), words: value => `${shown(value)} looks like an axial length in mm: axial length and corneal power seem to be swapped.` },
    { from: 10.5, to: 29.999, words: value => `${shown(value)} looks like the power of a lens, not of a cornea. Enter the K reading.` },
    { from: 300, to: 700, words: pointLeftOut(10, 'D') },
    { from: 3000, to: 7000, words: pointLeftOut(100, 'D') },
  ],
}

const axis: FieldLimit = { label: 'Corneal meridian', min: 0, max: 180, unit: 'degrees', required: true, mixUps: [
  { from: 180.001, to: 360, words: value => `${shown(value)} is more than half a turn. A meridian runs from 0 to 180: ${shown(value - 180)}?` },
] }

/**
 * What can be stored at all, field by field, and the slips that are recognised by name. Wider than any warning: an eye
 * outside these limits is not unusual but mistyped. 'common practice'; the axial length agrees with the stored limit.
 */
export const fieldLimits: Record<NumberField, FieldLimit> = {
  axialLengthMm: { label: 'Axial length', min: 14, max: 40, unit: 'mm', required: true, mixUps: [
    { from: 0.8, to: 7, when: eye => within(eye.anteriorChamberDepthMm, 14, 40), words: value => `${shown(value)} looks like a chamber depth: axial length and chamber depth seem to be swapped.` },
    { from: 1.4, to: 4, words: centimetres },
    { from: 0.014, to: 0.04, words: value => `${shown(value, 5)} looks like metres. Enter millimetres: ${shown(value * 1000)}.` },
    { from: 40.001, to: 70, when: eye => within(eye.k1D, 14, 36), words: value => `${shown(value)} looks like a corneal power in dioptres: axial length and corneal power seem to be swapped.` },
    { from: 40.001, to: 70, words: value => `${shown(value)} looks like a corneal power in dioptres. Enter the axial length in mm.` },
    { from: 140, to: 400, words: pointLeftOut(10, 'mm') },
    { from: 1400, to: 4000, words: pointLeftOut(100, 'mm') },
    { from: 14000, to: 40000, words: micrometres },
  ] },
  axialLengthSdMm: { label: 'Spread of the axial length readings (SD)', min: 0, max: 1, unit: 'mm', required: false, mixUps: [
    { from: 1.001, to: 999, words: micrometres },
  ] },
  k1D: cornea,
  k1AxisDegrees: axis,
  k2D: cornea,
  k2AxisDegrees: axis,
  keratometricIndex: { label: 'Keratometric index', min: 1.3, max: 1.4, unit: '', required: false, mixUps: [
    { from: 300, to: 400, words: value => `${shown(value)} is the index less one, times 1000. Enter the index: ${shown(1 + value / 1000, 4)}.` },
    { from: 0.3, to: 0.4, words: value => `${shown(value, 4)} is the index less one. Enter the index: ${shown(1 + value, 4)}.` },
  ] },
  anteriorChamberDepthMm: { label: 'Chamber depth', min: 1, max: 6.5, unit: 'mm', required: false, mixUps: [
    { from: 14, to: 40, when: eye => within(eye.axialLengthMm, 0.8, 7), words: value => `${shown(value)} looks like an axial length: chamber depth and axial length seem to be swapped.` },
    { from: 0.1, to: 0.65, words: centimetres },
    { from: 10, to: 65, words: pointLeftOut(10, 'mm') },
    { from: 100, to: 650, words: pointLeftOut(100, 'mm') },
    { from: 1000, to: 6500, words: micrometres },
  ] },
  lensThicknessMm: { label: 'Lens thickness', min: 1, max: 9, unit: 'mm', required: false, mixUps: [
    { from: 0.1, to: 0.9, words: centimetres },
    { from: 10, to: 90, words: pointLeftOut(10, 'mm') },
    { from: 100, to: 900, words: pointLeftOut(100, 'mm') },
    { from: 1000, to: 9000, words: micrometres },
  ] },
  whiteToWhiteMm: { label: 'White to white', min: 6, max: 16, unit: 'mm', required: false, mixUps: [
    { from: 0.6, to: 1.6, words: centimetres },
    { from: 60, to: 160, words: pointLeftOut(10, 'mm') },
    { from: 600, to: 1600, words: pointLeftOut(100, 'mm') },
    { from: 6000, to: 16000, words: micrometres },
  ] },
}

const fieldNames = Object.keys(fieldLimits) as NumberField[]

/** The limits of a field as a person reads them. */
export const limitWords = (field: NumberField): string => {
  const { min, max, unit } = fieldLimits[field]
  return `${min} to ${max}${unit ? ` ${unit}` : ''}`
}

function problemOf(field: NumberField, eye: EyeBiometry): FieldProblem | undefined {
  const value: unknown = eye[field]
  const { label, min, max, unit, required, mixUps } = fieldLimits[field]
  if (value === undefined || value === null) return required ? { field, code: 'required', message: `${label} is missing.`, limit: limitWords(field) } : undefined
  if (typeof value !== 'number' || !Number.isFinite(value)) return { field, code: 'not-a-number', message: `${label} is not a number.`, limit: limitWords(field) }
  if (value >= min && value <= max) return undefined
  const slip = mixUps.find(each => value >= each.from && value <= each.to && (each.when?.(eye) ?? true))
  if (slip) return { field, code: 'unit-mix-up', message: slip.words(value), limit: limitWords(field) }
  return { field, code: 'out-of-range', message: `${label} ${shown(value, 4)}${unit ? ` ${unit}` : ''} is outside ${limitWords(field)}. Check the reading.`, limit: limitWords(field) }
}

/** Everything in one eye's measurements that cannot be stored, named field by field; empty when all can. Never throws. */
export function biometryProblems(eye: EyeBiometry): FieldProblem[] {
  if (typeof eye !== 'object' || eye === null) return [{ field: 'eye', code: 'required', message: 'No measurements were given.' }]
  const found: FieldProblem[] = []
  for (const field of fieldNames) {
    const problem = problemOf(field, eye)
    if (problem) found.push(problem)
  }
  if (!eyes.includes(eye.eye)) found.push({ field: 'eye', code: 'required', message: 'Say which eye this is: right or left.' })
  return found
}

/**
 * @throws DomainError `biometry.unit-mix-up` when a known slip explains a value, else `biometry.out-of-range`; every
 * field is named with its limit.
 */
export function requireStorable(eye: EyeBiometry): void {
  const fields = biometryProblems(eye)
  if (fields.length === 0) return
  const slip = fields.find(each => each.code === 'unit-mix-up')
  throw new DomainError(slip ? 'biometry.unit-mix-up' : 'biometry.out-of-range', (slip ?? fields[0]!).message, { fields })
}

export const indexOf = (eye: EyeBiometry) => eye.keratometricIndex ?? defaultKeratometricIndex

/** Mean of the two meridians, in dioptres for the index 1.3375 (power is proportional to index less one at a fixed radius). */
export const meanCornealPowerD = (eye: EyeBiometry) => (eye.k1D + eye.k2D) / 2 * (0.3375 / (indexOf(eye) - 1))
