import { DomainError } from '#shared/domain/errors'
import { inForm, plain, requireRefraction, wrapAxis } from '#shared/domain/outcome/refraction'
import type { CylinderForm, Refraction } from '#shared/domain/outcome/refraction'

/**
 * A refraction as three independent powers in dioptres: M the spherical equivalent, J0 and J45 the crossed cylinders
 * at 0 and 45 degrees. Thibos LN, Wheeler W, Horner D, Optom Vis Sci 1997;74:367-375. These may be added and averaged;
 * spheres, cylinders and axes may not.
 */
export interface PowerVector { m: number, j0: number, j45: number }

const radians = (degrees: number) => degrees * Math.PI / 180

function requireVector(vector: PowerVector): void {
  const parts: unknown[] = [vector?.m, vector?.j0, vector?.j45]
  if (parts.every(part => typeof part === 'number' && Math.abs(part) <= 1000)) return
  throw new DomainError('outcome.vector-out-of-range', 'A power vector needs M, J0 and J45 in dioptres.', { fields: [{ field: 'vector', code: 'out-of-range', message: 'Give M, J0 and J45 as numbers.', limit: '-1000 to 1000 D' }] })
}

/** @throws DomainError as `requireRefraction`. */
export function powerVectorOf(refraction: Refraction): PowerVector {
  requireRefraction(refraction)
  const { sphereD, cylinderD, axisDegrees } = refraction
  return {
    m: plain(sphereD + cylinderD / 2),
    j0: plain(-(cylinderD / 2) * Math.cos(2 * radians(axisDegrees))),
    j45: plain(-(cylinderD / 2) * Math.sin(2 * radians(axisDegrees))),
  }
}

/** Crossed cylinders smaller than this, in dioptres, are what rounding leaves, and have no axis. */
const noCylinder = 1e-9

/** Back to sphere, cylinder and axis; without a cylinder the axis is 180. */
export function refractionOf(vector: PowerVector, form: CylinderForm = 'minus'): Refraction {
  requireVector(vector)
  const crossed = Math.hypot(vector.j0, vector.j45)
  if (crossed < noCylinder) return { sphereD: plain(vector.m), cylinderD: 0, axisDegrees: 180 }
  const minus = { sphereD: plain(vector.m + crossed), cylinderD: -2 * crossed, axisDegrees: wrapAxis(Math.atan2(vector.j45, vector.j0) * 90 / Math.PI) }
  return form === 'minus' ? minus : inForm(minus, 'plus')
}

/** Length of the vector in dioptres: how blurred the uncorrected eye is (Thibos and Horner, J Cataract Refract Surg 2001;27:80-85). */
export function blurStrengthD(vector: PowerVector): number {
  requireVector(vector)
  return Math.hypot(vector.m, vector.j0, vector.j45)
}

export function addVectors(a: PowerVector, b: PowerVector): PowerVector {
  requireVector(a)
  requireVector(b)
  return { m: plain(a.m + b.m), j0: plain(a.j0 + b.j0), j45: plain(a.j45 + b.j45) }
}

export function subtractVectors(a: PowerVector, b: PowerVector): PowerVector {
  requireVector(b)
  return addVectors(a, { m: -b.m, j0: -b.j0, j45: -b.j45 })
}

/** @throws DomainError `outcome.too-few-refractions` for none. */
export function meanRefraction(refractions: readonly Refraction[], form: CylinderForm = 'minus'): Refraction {
  if (!Array.isArray(refractions) || refractions.length === 0) throw new DomainError('outcome.too-few-refractions', 'There is no refraction to average.', { fields: [{ field: 'refractions', code: 'too-few', message: 'Give at least one refraction.', limit: '1 or more' }] })
  const sum = refractions.map(powerVectorOf).reduce(addVectors)
  return refractionOf({ m: sum.m / refractions.length, j0: sum.j0 / refractions.length, j45: sum.j45 / refractions.length }, form)
}
