import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'

/**
 * A refraction at the spectacle plane. The cylinder may have either sign; `axisDegrees` is its axis, 1 to 180 (0 is
 * written as 180), and is 180 where the cylinder is 0 and an axis means nothing.
 */
export interface Refraction {
  sphereD: number
  cylinderD: number
  axisDegrees: number
}

export type CylinderForm = 'minus' | 'plus'

export const refractionFieldLimits = {
  sphereD: { min: -30, max: 30, unit: 'D', label: 'Sphere' },
  cylinderD: { min: -15, max: 15, unit: 'D', label: 'Cylinder' },
  axisDegrees: { min: 0, max: 180, unit: 'degrees', label: 'Axis' },
} as const

/** Distance of spectacles from the cornea in mm: 12 unless measured. */
export const usualVertexMm = 12

/** An axis in 0 < a <= 180; axes half a turn apart are the same. */
export function wrapAxis(degrees: number): number {
  const rest = ((degrees % 180) + 180) % 180
  return rest < 1e-9 || rest > 180 - 1e-9 ? 180 : rest
}

/** Rids a result of -0, which prints as a sign that nobody measured. */
export const plain = (value: number) => value === 0 ? 0 : value

/**
 * @throws DomainError `outcome.refraction-out-of-range` naming each part beyond sphere -30 to +30 D, cylinder -15 to
 * +15 D, axis 0 to 180 degrees, or that is not a number.
 */
export function requireRefraction(refraction: Refraction, field = 'refraction'): void {
  const fields: FieldProblem[] = []
  for (const name of ['sphereD', 'cylinderD', 'axisDegrees'] as const) {
    const { min, max, unit, label } = refractionFieldLimits[name]
    const value: unknown = refraction?.[name]
    const limit = `${min} to ${max} ${unit}`
    if (typeof value !== 'number' || !Number.isFinite(value)) fields.push({ field: `${field}.${name}`, code: 'not-a-number', message: `${label} is missing or is not a number.`, limit })
    else if (value < min || value > max) fields.push({ field: `${field}.${name}`, code: 'out-of-range', message: `${label} ${value} is outside ${limit}.`, limit })
  }
  if (fields.length) throw new DomainError('outcome.refraction-out-of-range', fields[0]!.message, { fields })
}

/** Sphere plus half the cylinder, in dioptres; the same in both cylinder forms. */
export function sphericalEquivalentD(refraction: Refraction): number {
  requireRefraction(refraction)
  return plain(refraction.sphereD + refraction.cylinderD / 2)
}

/** The same lens with the cylinder's other sign: sphere + cylinder, sign turned, axis a right angle on. */
export function transpose(refraction: Refraction): Refraction {
  requireRefraction(refraction)
  return transposed(refraction)
}

function transposed({ sphereD, cylinderD, axisDegrees }: Refraction): Refraction {
  if (cylinderD === 0) return { sphereD: plain(sphereD), cylinderD: 0, axisDegrees: 180 }
  return { sphereD: plain(sphereD + cylinderD), cylinderD: -cylinderD, axisDegrees: wrapAxis(axisDegrees + 90) }
}

/** The refraction written with a minus or a plus cylinder. */
export function inForm(refraction: Refraction, form: CylinderForm): Refraction {
  requireRefraction(refraction)
  const { cylinderD } = refraction
  const isInForm = form === 'minus' ? cylinderD <= 0 : cylinderD >= 0
  if (!isInForm || cylinderD === 0) return transposed(refraction)
  return { ...refraction, sphereD: plain(refraction.sphereD), axisDegrees: wrapAxis(refraction.axisDegrees) }
}

function requireVertex(vertexMm: number): void {
  if (vertexMm >= 0 && vertexMm <= 30) return
  throw new DomainError('outcome.vertex-out-of-range', 'The vertex distance is outside 0 to 30 mm.', { fields: [{ field: 'vertexMm', code: 'out-of-range', message: 'Enter the distance from the cornea to the spectacles in mm; 12 is usual.', limit: '0 to 30 mm' }] })
}

/** Moves one meridian's power by a distance (textbook vergence: F / (1 - d F), d in metres); `null` where it has no image. */
function moved(powerD: number, distanceMm: number): number | null {
  const denominator = 1 - distanceMm / 1000 * powerD
  return denominator > 0.05 ? powerD / denominator : null
}

function movedRefraction(refraction: Refraction, distanceMm: number): Refraction {
  const first = moved(refraction.sphereD, distanceMm)
  const second = moved(refraction.sphereD + refraction.cylinderD, distanceMm)
  if (first === null || second === null) throw new DomainError('outcome.vertex-no-image', 'So strong a lens has no usable equivalent at that distance.', { fields: [{ field: 'refraction.sphereD', code: 'out-of-range', message: 'Check the power and the vertex distance.', limit: 'power times distance below 0.95' }] })
  return { sphereD: plain(first), cylinderD: plain(second - first), axisDegrees: wrapAxis(refraction.axisDegrees) }
}

/**
 * The refraction at the cornea of a spectacle refraction. Each principal meridian is moved by itself, since moving the
 * sphere and the cylinder apart is wrong.
 * @param vertexMm distance of the spectacles from the cornea, 0 to 30 mm.
 * @throws DomainError for a refraction or distance out of range, or a lens without an image there.
 */
export function toCornealPlane(spectacle: Refraction, vertexMm = usualVertexMm): Refraction {
  requireRefraction(spectacle)
  requireVertex(vertexMm)
  return movedRefraction(spectacle, vertexMm)
}

/** The spectacle refraction of a refraction at the cornea; the inverse of `toCornealPlane`. */
export function toSpectaclePlane(corneal: Refraction, vertexMm = usualVertexMm): Refraction {
  // A corneal value may exceed what spectacles hold (+30 D at 12 mm is +46.9 D at the cornea), so only numbers are asked for.
  const parts = [corneal?.sphereD, corneal?.cylinderD, corneal?.axisDegrees]
  if (parts.some(part => !Number.isFinite(part)) || Math.abs(corneal.sphereD) > 600 || Math.abs(corneal.cylinderD) > 600) throw new DomainError('outcome.refraction-out-of-range', 'The corneal refraction is not one.', { fields: [{ field: 'refraction', code: 'out-of-range', message: 'Enter sphere, cylinder and axis as numbers.', limit: '-600 to 600 D' }] })
  requireVertex(vertexMm)
  return movedRefraction(corneal, -vertexMm)
}
