import { DomainError } from '#shared/domain/errors'
import { inForm, plain, refractionFieldLimits, requireRefraction, wrapAxis } from '#shared/domain/outcome/refraction'
import type { CylinderForm, Refraction } from '#shared/domain/outcome/refraction'

const whatToEnter = 'Enter it as -2.00 / -1.50 x 180, +1.25 DS or plano.'

function refuse(kind: 'required' | 'unclear' | 'sign-missing' | 'axis-missing' | 'axis-out-of-range' | 'out-of-range' | 'point-missing', message: string, field: string, limit?: string): never {
  throw new DomainError(`outcome.refraction-${kind}`, message, { fields: [{ field, code: kind, message, ...(limit ? { limit } : {}) }] })
}

/** Indivisible: without the look-ahead `-2.00 x 90` would be read as a sphere of -2.0 and a cylinder of 0. */
const number = '[+-]? ?(?:\\d+(?:\\.\\d+)?|\\.\\d+)(?![\\d.])'
const zero = 'plano|plan|pl'
const pattern = new RegExp(`^(${number}|${zero}) ?(?:d?sph?|ds|d)?(?: ?[/,;]? ?(${number}) ?(?:dc|cyl|d)?(?: ?(?:[x×*@]|ax(?:is)?) ?(\\d+(?:\\.\\d+)?) ?(?:°|deg(?:rees)?)?)?)?$`)

/** Half a typed number is worse than none: what cannot be read whole is refused. */
function readPower(text: string, what: 'Sphere' | 'Cylinder', field: string): number {
  const bare = text.replace(/ /g, '')
  const value = Number(bare)
  const { min, max } = refractionFieldLimits[what === 'Sphere' ? 'sphereD' : 'cylinderD']
  if (value !== 0 && !/^[+-]/.test(bare)) refuse('sign-missing', `${what} ${bare} has no sign. Enter +${bare} or -${bare}.`, field)
  if (Math.abs(value) >= 25 && Number.isInteger(value) && !bare.includes('.') && Math.abs(value) % 25 === 0 && (value < min || value > max)) refuse('point-missing', `${what} ${bare} looks as if the decimal point was left out: ${(value / 100).toFixed(2)}?`, field, `${min} to ${max} D`)
  if (value < min || value > max) refuse('out-of-range', `${what} ${bare} D is outside ${min} to ${max} D.`, field, `${min} to ${max} D`)
  return plain(value)
}

/**
 * Reads a refraction as it is typed: `-2.00 / -1.50 x 180`, `+1.00 DS`, `pl / -0.50 x 90`, `-1,25 -0,50 @ 5`. Kept
 * in the cylinder form that was typed. A power other than 0 needs its sign, a cylinder its axis; nothing is guessed.
 * @throws DomainError `outcome.refraction-required`, `-unclear`, `-sign-missing`, `-axis-missing`,
 * `-axis-out-of-range`, `-point-missing` (a power of 225 for 2.25) or `-out-of-range`.
 */
export function parseRefraction(text: string, field = 'refraction'): Refraction {
  if (typeof text !== 'string' || text.trim() === '') refuse('required', `No refraction was entered. ${whatToEnter}`, field)
  const shown = text.trim().replace(/\s+/g, ' ')
  const tidy = shown.toLowerCase().normalize('NFKC').replace(/[\u2010-\u2015\u2212]/g, '-').replace(/(\d),(\d)/g, '$1.$2').replace(/\u2044/g, '/')
  const match = pattern.exec(tidy)
  if (!match) refuse('unclear', `"${shown.slice(0, 60)}" cannot be read as a refraction. ${whatToEnter}`, field)
  const sphereText = match[1]!
  const sphereD = /\d/.test(sphereText) ? readPower(sphereText, 'Sphere', field) : 0
  if (match[2] === undefined) return { sphereD, cylinderD: 0, axisDegrees: 180 }
  const cylinderD = readPower(match[2], 'Cylinder', field)
  if (cylinderD === 0) return { sphereD, cylinderD: 0, axisDegrees: 180 }
  if (match[3] === undefined) refuse('axis-missing', `The cylinder ${match[2]} has no axis. ${whatToEnter}`, field, '1 to 180 degrees')
  const axis = Number(match[3])
  if (axis > 180) refuse('axis-out-of-range', `Axis ${match[3]} is more than 180 degrees.`, field, '1 to 180 degrees')
  return { sphereD, cylinderD, axisDegrees: wrapAxis(axis) }
}

const signed = (value: number) => `${value < 0 ? '\u2212' : '+'}${Math.abs(value).toFixed(2)}`

/**
 * Writes a refraction, sphere and cylinder to 0.01 D and the axis to a degree: `−2.00 / −1.50 × 180`, `+1.00 DS`, `plano`.
 */
export function formatRefraction(refraction: Refraction, form: CylinderForm = 'minus'): string {
  requireRefraction(refraction)
  const rounded = { ...refraction, sphereD: Number(refraction.sphereD.toFixed(2)), cylinderD: Number(refraction.cylinderD.toFixed(2)) }
  const { sphereD, cylinderD, axisDegrees } = inForm(rounded, form)
  const sphere = Number(sphereD.toFixed(2)) === 0 ? 'plano' : signed(sphereD)
  if (cylinderD === 0) return sphere === 'plano' ? 'plano' : `${sphere} DS`
  return `${sphere} / ${signed(cylinderD)} × ${Math.round(axisDegrees) || 180}`
}
