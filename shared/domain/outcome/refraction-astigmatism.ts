import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import { plain, toCornealPlane, usualVertexMm, wrapAxis } from '#shared/domain/outcome/refraction'
import type { Refraction } from '#shared/domain/outcome/refraction'
import { powerVectorOf, subtractVectors } from '#shared/domain/outcome/refraction-vectors'
import type { PowerVector } from '#shared/domain/outcome/refraction-vectors'

/** Corneal astigmatism: how much steeper the steep meridian is, in dioptres (0 or more), and where it lies. */
export interface Astigmatism { magnitudeD: number, steepDegrees: number }

/**
 * A point of the double-angle plot in dioptres. With-the-rule astigmatism lies at negative x. Link to power vectors:
 * x = -2 J0, y = -2 J45 of the correcting minus cylinder.
 */
export interface DoubleAnglePoint { x: number, y: number }

const limitD = 30
/** Below this, in dioptres, what is left is rounding and has no direction. */
const noAstigmatism = 1e-9

function requireAstigmatism(given: Astigmatism, field: string): void {
  const fields: FieldProblem[] = []
  const { magnitudeD, steepDegrees } = given ?? {}
  if (typeof magnitudeD !== 'number' || !(magnitudeD >= 0 && magnitudeD <= limitD)) fields.push({ field: `${field}.magnitudeD`, code: 'out-of-range', message: 'Enter how much steeper the steep meridian is, in dioptres; it is never negative.', limit: `0 to ${limitD} D` })
  if (typeof steepDegrees !== 'number' || !(steepDegrees >= 0 && steepDegrees <= 180)) fields.push({ field: `${field}.steepDegrees`, code: 'out-of-range', message: 'Enter the steep meridian in degrees.', limit: '0 to 180 degrees' })
  if (fields.length) throw new DomainError('outcome.astigmatism-out-of-range', fields[0]!.message, { fields })
}

/** Astigmatism of two keratometric meridians, whichever of them is the steep one. */
export function cornealAstigmatism(cornea: { k1D: number, k1AxisDegrees: number, k2D: number, k2AxisDegrees: number }): Astigmatism {
  const steeper = cornea.k2D >= cornea.k1D
  const found = { magnitudeD: Math.abs(cornea.k2D - cornea.k1D), steepDegrees: steeper ? cornea.k2AxisDegrees : cornea.k1AxisDegrees }
  requireAstigmatism(found, 'cornea')
  return { ...found, steepDegrees: wrapAxis(found.steepDegrees) }
}

/** Magnitude and doubled meridian (Holladay JT, Moran JR, Kezirian GM. J Cataract Refract Surg 2001;27:61-79). */
export function doubleAngle(astigmatism: Astigmatism, field = 'astigmatism'): DoubleAnglePoint {
  requireAstigmatism(astigmatism, field)
  const doubled = 2 * astigmatism.steepDegrees * Math.PI / 180
  return { x: plain(astigmatism.magnitudeD * Math.cos(doubled)), y: plain(astigmatism.magnitudeD * Math.sin(doubled)) }
}

/** Back from the plot; undefined meridians do not exist here: without astigmatism the meridian is 180. */
export function astigmatismAt(point: DoubleAnglePoint): Astigmatism {
  requirePoints([point])
  const magnitudeD = Math.hypot(point.x, point.y)
  return magnitudeD < noAstigmatism ? { magnitudeD: 0, steepDegrees: 180 } : { magnitudeD, steepDegrees: wrapAxis(Math.atan2(point.y, point.x) * 90 / Math.PI) }
}

/**
 * Surgically induced astigmatism from keratometry: the vector that surgery added, after less before on the
 * double-angle plot. Its magnitude is not the difference of the magnitudes.
 */
export function inducedAstigmatism(before: Astigmatism, after: Astigmatism): Astigmatism & { point: DoubleAnglePoint } {
  const [from, to] = [doubleAngle(before, 'before'), doubleAngle(after, 'after')]
  const point = { x: plain(to.x - from.x), y: plain(to.y - from.y) }
  return { ...astigmatismAt(point), point }
}

/** Change of refraction by surgery at the corneal plane, after less before: both are moved to the cornea first (Holladay 2001). */
export function inducedRefractionChange(before: Refraction, after: Refraction, vertexMm = usualVertexMm): PowerVector {
  return subtractVectors(cornealVector(after, vertexMm), cornealVector(before, vertexMm))
}

/** A refraction at the cornea may exceed the limits of one at the spectacles, so its vector is worked out here. */
function cornealVector(spectacle: Refraction, vertexMm: number): PowerVector {
  const corneal = toCornealPlane(spectacle, vertexMm)
  const unit = powerVectorOf({ sphereD: 0, cylinderD: -2, axisDegrees: corneal.axisDegrees })
  const crossed = -corneal.cylinderD / 2
  return { m: corneal.sphereD + corneal.cylinderD / 2, j0: unit.j0 * crossed, j45: unit.j45 * crossed }
}

export function requirePoints(points: readonly DoubleAnglePoint[]): void {
  const wrong = points.findIndex(point => typeof point?.x !== 'number' || typeof point?.y !== 'number' || !(Math.abs(point.x) <= 1000 && Math.abs(point.y) <= 1000))
  if (wrong >= 0) throw new DomainError('outcome.point-out-of-range', `Point ${wrong + 1} of the double-angle plot is not one.`, { fields: [{ field: `points.${wrong}`, code: 'out-of-range', message: 'Give x and y in dioptres.', limit: '-1000 to 1000 D' }] })
}
