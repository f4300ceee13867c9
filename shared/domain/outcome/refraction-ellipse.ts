import { mean, sampleCovariance, sampleVariance } from 'simple-statistics'
import { DomainError } from '#shared/domain/errors'
import { astigmatismAt, requirePoints } from '#shared/domain/outcome/refraction-astigmatism'
import type { Astigmatism, DoubleAnglePoint } from '#shared/domain/outcome/refraction-astigmatism'

/**
 * Which ellipse. `data-large` and `data` hold 95 % of eyes; `centroid-large` and `centroid` are the confidence region
 * of the mean. The `-large` ones use the chi-squared quantile, the others Hotelling's T², which is right for few eyes.
 * Published plots draw more than one of these without saying which, so the choice is always named.
 */
export const ellipseKinds = ['data-large', 'data', 'centroid', 'centroid-large'] as const
export type EllipseKind = typeof ellipseKinds[number]

export interface Ellipse {
  kind: EllipseKind
  centre: DoubleAnglePoint
  semiMajorD: number
  semiMinorD: number
  /** Direction of the long axis in the plot, 0 to 180 degrees; plot degrees, so twice those of the eye. */
  tiltDegrees: number
}

export interface Centroid {
  eyes: number
  point: DoubleAnglePoint
  /** The mean vector as astigmatism. Not the mean of the magnitudes. */
  astigmatism: Astigmatism
  meanMagnitudeD: number
  sdXD: number
  sdYD: number
}

const confidence = 0.95
/** Chi-squared quantile for two degrees of freedom, closed form: 5.9915 for 0.95. */
const chiSquared = -2 * Math.log(1 - confidence)
/** F quantile for (2, m) degrees of freedom, closed form: the tail is (1 + 2 f / m)^(-m / 2). */
export const fQuantile = (m: number) => m / 2 * ((1 - confidence) ** (-2 / m) - 1)

function requireEnough(points: readonly DoubleAnglePoint[], least: number): void {
  if (!Array.isArray(points) || points.length < least) throw new DomainError('outcome.too-few-eyes', `At least ${least} eyes are needed for this.`, { fields: [{ field: 'points', code: 'too-few', message: `Give at least ${least} eyes.`, limit: `${least} or more` }] })
  requirePoints(points)
}

/**
 * Mean of the points of a double-angle plot, with sample standard deviations (n - 1).
 * @throws DomainError `outcome.too-few-eyes` for fewer than two.
 */
export function centroidOf(points: readonly DoubleAnglePoint[]): Centroid {
  requireEnough(points, 2)
  const [xs, ys] = [points.map(each => each.x), points.map(each => each.y)]
  const point = { x: mean(xs), y: mean(ys) }
  return {
    eyes: points.length, point, astigmatism: astigmatismAt(point), meanMagnitudeD: mean(points.map(each => Math.hypot(each.x, each.y))),
    sdXD: Math.sqrt(sampleVariance(xs)), sdYD: Math.sqrt(sampleVariance(ys)),
  }
}

const factors: Record<EllipseKind, (n: number) => number> = {
  'data-large': () => chiSquared,
  'data': n => 2 * (n - 1) * (n + 1) / (n * (n - 2)) * fQuantile(n - 2),
  'centroid': n => 2 * (n - 1) / (n * (n - 2)) * fQuantile(n - 2),
  'centroid-large': n => chiSquared / n,
}

/**
 * 95 % ellipse on the double-angle plot, along the eigenvectors of the sample covariance.
 * @throws DomainError `outcome.too-few-eyes` for fewer than three.
 */
export function confidenceEllipse(points: readonly DoubleAnglePoint[], kind: EllipseKind): Ellipse {
  requireEnough(points, 3)
  if (!ellipseKinds.includes(kind)) throw new DomainError('outcome.ellipse-unknown', 'Say which ellipse is meant.', { fields: [{ field: 'kind', code: 'unknown', message: 'Choose one of the ellipses.', limit: ellipseKinds.join(', ') }] })
  const [xs, ys] = [points.map(each => each.x), points.map(each => each.y)]
  const [varX, varY, covariance] = [sampleVariance(xs), sampleVariance(ys), sampleCovariance(xs, ys)]
  const middle = (varX + varY) / 2
  const apart = Math.hypot((varX - varY) / 2, covariance)
  const factor = factors[kind](points.length)
  const tilt = Math.atan2(2 * covariance, varX - varY) * 90 / Math.PI
  return {
    kind,
    centre: { x: mean(xs), y: mean(ys) },
    semiMajorD: Math.sqrt(factor * (middle + apart)),
    semiMinorD: Math.sqrt(factor * Math.max(0, middle - apart)),
    tiltDegrees: tilt < 0 ? tilt + 180 : tilt,
  }
}
