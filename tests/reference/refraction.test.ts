import { describe, expect, it } from 'vitest'
import { inForm, sphericalEquivalentD, toCornealPlane, toSpectaclePlane, transpose } from '#shared/domain/outcome/refraction'
import { astigmatismAt, doubleAngle, inducedAstigmatism, inducedRefractionChange } from '#shared/domain/outcome/refraction-astigmatism'
import { centroidOf, confidenceEllipse, fQuantile } from '#shared/domain/outcome/refraction-ellipse'
import { addVectors, blurStrengthD, meanRefraction, powerVectorOf, refractionOf } from '#shared/domain/outcome/refraction-vectors'
import type { Refraction } from '#shared/domain/outcome/refraction'

type Three = [number, number, number]
const rx = ([sphereD, cylinderD, axisDegrees]: Three): Refraction => ({ sphereD, cylinderD, axisDegrees })
function expectRefraction(found: Refraction, [sphere, cylinder, axis]: Three, digits = 6) {
  expect(found.sphereD).toBeCloseTo(sphere, digits)
  expect(found.cylinderD).toBeCloseTo(cylinder, digits)
  expect(found.axisDegrees).toBeCloseTo(axis, Math.min(digits, 1))
}

describe('cylinder forms (textbook transposition: sphere + cylinder, sign turned, axis a right angle on)', () => {
  it.each<[Three, Three, number]>([
    [[-2, -1.5, 180], [-3.5, 1.5, 90], -2.75], [[1, -2.25, 15], [-1.25, 2.25, 105], -0.125], [[-0.5, 0.75, 100], [0.25, -0.75, 10], -0.125],
    [[0, -1, 90], [-1, 1, 180], -0.5], [[2.5, 1.25, 170], [3.75, -1.25, 80], 3.125], [[-3.25, -0.5, 5], [-3.75, 0.5, 95], -3.5],
    [[0.25, -0.5, 45], [-0.25, 0.5, 135], 0], [[-1.25, 2.5, 91], [1.25, -2.5, 1], 0],
  ])('%j is %j, spherical equivalent %d', (one, other, equivalentD) => {
    expectRefraction(transpose(rx(one)), other)
    expectRefraction(transpose(rx(other)), one)
    expect(sphericalEquivalentD(rx(one))).toBeCloseTo(equivalentD, 9)
    expect(sphericalEquivalentD(rx(other))).toBeCloseTo(equivalentD, 9)
    expect(inForm(rx(one), 'minus').cylinderD).toBeLessThanOrEqual(0)
    expect(inForm(rx(one), 'plus').cylinderD).toBeGreaterThanOrEqual(0)
  })
})

describe('power vectors (Thibos, Wheeler, Horner, Optom Vis Sci 1997;74:367-375)', () => {
  it.each<[Three, Three, number, Three]>([
    [[-2, -1.5, 180], [-2.75, 0.75, 0], 2.8504, [-2, -1.5, 180]], [[-3.5, 1.5, 90], [-2.75, 0.75, 0], 2.8504, [-2, -1.5, 180]],
    [[-2, -1.5, 90], [-2.75, -0.75, 0], 2.8504, [-2, -1.5, 90]], [[-1, -2, 45], [-2, 0, 1], 2.2361, [-1, -2, 45]],
    [[-1, -2, 135], [-2, 0, -1], 2.2361, [-1, -2, 135]], [[1.5, -3, 30], [0, 0.75, 1.299], 1.5, [1.5, -3, 30]],
    [[0.5, -0.75, 20], [0.125, 0.2873, 0.241], 0.3953, [0.5, -0.75, 20]], [[-4.25, -1.25, 165], [-4.875, 0.5413, -0.3125], 4.9149, [-4.25, -1.25, 165]],
    [[2, 1, 120], [2.5, 0.25, 0.433], 2.5495, [3, -1, 30]], [[0, -1, 10], [-0.5, 0.4698, 0.171], 0.7071, [0, -1, 10]],
  ])('%j is M, J0, J45 %j, strength %d', (given, [m, j0, j45], strength, back) => {
    const vector = powerVectorOf(rx(given))
    expect(vector.m).toBeCloseTo(m, 4)
    expect(vector.j0).toBeCloseTo(j0, 4)
    expect(vector.j45).toBeCloseTo(j45, 4)
    expect(blurStrengthD(vector)).toBeCloseTo(strength, 4)
    expectRefraction(refractionOf(vector), back)
  })
  it('adds two crossed lenses to the published answer (The Indian Optician, May-June 2022, p. 105)', () => {
    const sum = addVectors(powerVectorOf(rx([1.75, 0.5, 45])), powerVectorOf(rx([-2.25, -1, 135])))
    expect(sum.m).toBeCloseTo(-0.75, 12)
    expect(sum.j0).toBeCloseTo(0, 12)
    expect(sum.j45).toBeCloseTo(-0.75, 12)
    expectRefraction(refractionOf(sum), [0, -1.5, 135])
    expectRefraction(refractionOf(sum, 'plus'), [-1.5, 1.5, 45])
  })
  it('averages across 180 degrees, where the mean of the axes would be a right angle off (worked out outside this code)', () => {
    expectRefraction(meanRefraction([rx([-1, -1, 10]), rx([-1, -1, 170])]), [-1.0302, -0.9397, 180], 4)
    expectRefraction(meanRefraction([rx([0, -1, 180]), rx([0, -1, 90])]), [-0.5, 0, 180])
  })
})

describe('vertex distance (textbook vergence F / (1 - d F))', () => {
  it.each([
    [-12, -10.4895, -10.4348, -10.274], [-10, -8.9286, -8.8889, -8.7719], [-8, -7.2993, -7.2727, -7.1942], [-6, -5.597, -5.5814, -5.5351],
    [-4, -3.8168, -3.8095, -3.7879], [-0.5, -0.497, -0.4969, -0.4965], [0.5, 0.503, 0.5031, 0.5035], [4, 4.2017, 4.2105, 4.2373],
    [8, 8.8496, 8.8889, 9.009], [10, 11.3636, 11.4286, 11.6279], [12, 14.0187, 14.1176, 14.4231],
  ])('%d D is %d, %d and %d D at the cornea from 12, 12.5 and 14 mm', (powerD, at12, at125, at14) => {
    for (const [vertexMm, cornealD] of [[12, at12], [12.5, at125], [14, at14]] as const) {
      const corneal = toCornealPlane(rx([powerD, 0, 180]), vertexMm)
      expect(corneal.sphereD).toBeCloseTo(cornealD, 4)
      expect(toSpectaclePlane(corneal, vertexMm).sphereD).toBeCloseTo(powerD, 9)
    }
  })
  it.each<[Three, Three, number]>([
    [[-5, -2, 180], [-4.717, -1.7406, 180], -5.5873], [[3, 1.5, 90], [3.112, 1.6448, 90], 3.9345], [[-10, -3, 20], [-8.9286, -2.3171, 20], -10.0871],
    [[6, -2, 170], [6.4655, -2.2638, 170], 5.3336], [[-0.5, -1, 75], [-0.497, -0.9765, 75], -0.9852],
  ])('moves each meridian of %j by itself', (spectacle, corneal, equivalentD) => {
    expectRefraction(toCornealPlane(rx(spectacle)), corneal, 4)
    expect(sphericalEquivalentD(toCornealPlane(rx(spectacle)))).toBeCloseTo(equivalentD, 4)
  })
})

/** The same by the law of cosines on the doubled angle, an independent way to the magnitude. */
const cosineRule = ([m1, a1]: [number, number], [m2, a2]: [number, number]) => Math.sqrt(Math.max(0, m1 * m1 + m2 * m2 - 2 * m1 * m2 * Math.cos(2 * (a1 - a2) * Math.PI / 180)))

describe('surgically induced astigmatism (Holladay, Moran, Kezirian, J Cataract Refract Surg 2001;27:61-79; rows worked out outside this code)', () => {
  it.each<[[number, number], [number, number], [number, number], number, number]>([
    [[1.5, 90], [1, 90], [0.5, 0], 0.5, 180], [[1, 90], [0.75, 80], [0.2952, 0.2565], 0.3911, 20.49], [[0.75, 10], [1.25, 170], [0.4698, -0.684], 0.8299, 152.24],
    [[2, 45], [1, 60], [-0.5, -1.134], 1.2393, 123.1], [[0.5, 175], [0.5, 5], [0, 0.1736], 0.1736, 45], [[0, 180], [0.4, 100], [-0.3759, -0.1368], 0.4, 100],
    [[1.25, 15], [1.25, 15], [0, 0], 0, 180], [[1, 90], [1, 180], [2, 0], 2, 180], [[3.25, 104], [0.62, 68], [2.4236, 1.9565], 3.1147, 19.46],
  ])('%j to %j adds %j: %d D at %d', (before, after, [x, y], magnitudeD, steepDegrees) => {
    const found = inducedAstigmatism({ magnitudeD: before[0], steepDegrees: before[1] }, { magnitudeD: after[0], steepDegrees: after[1] })
    expect(found.point.x).toBeCloseTo(x, 4)
    expect(found.point.y).toBeCloseTo(y, 4)
    expect(found.magnitudeD).toBeCloseTo(magnitudeD, 4)
    expect(found.magnitudeD).toBeCloseTo(cosineRule(before, after), 9)
    expect(Math.abs(found.steepDegrees - steepDegrees)).toBeLessThan(0.01)
  })
  it.each<[Three, Three, Three]>([
    [[-6, -2, 180], [-0.25, -0.75, 170], [5.8294, -0.504, -0.1264]], [[3, -1, 90], [-0.5, -0.5, 75], [-3.3232, 0.3188, 0.1228]],
  ])('the refraction %j that became %j changed by %j at the cornea', (before, after, [m, j0, j45]) => {
    const change = inducedRefractionChange(rx(before), rx(after))
    expect(change.m).toBeCloseTo(m, 4)
    expect(change.j0).toBeCloseTo(j0, 4)
    expect(change.j45).toBeCloseTo(j45, 4)
  })
  it('plots with-the-rule astigmatism at the left and ties it to the power vector by -2', () => {
    expect(doubleAngle({ magnitudeD: 1.5, steepDegrees: 90 }).x).toBeCloseTo(-1.5, 12)
    const correcting = powerVectorOf(rx([0, -1.2, 110]))
    const point = doubleAngle({ magnitudeD: 1.2, steepDegrees: 20 })
    expect(point.x).toBeCloseTo(-2 * correcting.j0, 12)
    expect(point.y).toBeCloseTo(-2 * correcting.j45, 12)
  })
})

describe('centroid and 95 % ellipses of ten invented eyes (Hotelling; worked out outside this code)', () => {
  const points = ([[0.45, 100], [0.3, 85], [0.6, 95], [0.25, 170], [0.5, 110], [0.35, 80], [0.7, 92], [0.2, 45], [0.4, 105], [0.55, 88]] as const)
    .map(([magnitudeD, steepDegrees]) => doubleAngle({ magnitudeD, steepDegrees }))
  const centroid = centroidOf(points)
  it('has its centroid at 0.34 D at 94 degrees, not at the mean magnitude of 0.43 D', () => {
    expect(centroid.eyes).toBe(10)
    expect(centroid.point.x).toBeCloseTo(-0.33795, 5)
    expect(centroid.point.y).toBeCloseTo(-0.05037, 5)
    expect(centroid.astigmatism.magnitudeD).toBeCloseTo(0.3417, 4)
    expect(centroid.astigmatism.steepDegrees).toBeCloseTo(94.24, 2)
    expect(centroid.meanMagnitudeD).toBeCloseTo(0.43, 9)
    expect(centroid.sdXD).toBeCloseTo(0.27725, 5)
    expect(centroid.sdYD).toBeCloseTo(0.15659, 5)
    expect(astigmatismAt(centroid.point)).toEqual(centroid.astigmatism)
  })
  it('uses F(0.95; 2, 8) = 4.4590 as in printed tables', () => {
    expect(fQuantile(8)).toBeCloseTo(4.459, 4)
    /** 4.1028, 3.4928 and 3.0912: F tables of any statistics text for (2, 10), (2, 20), (2, 98). */
    expect(fQuantile(10)).toBeCloseTo(4.1028, 4)
    expect(fQuantile(20)).toBeCloseTo(3.4928, 4)
  })
  it.each([['data-large', 0.6862, 0.3695], ['data', 0.9313, 0.5015], ['centroid', 0.2808, 0.1512], ['centroid-large', 0.217, 0.1169]] as const)('%s has semi-axes %d and %d D, tilted 10.14 plot degrees', (kind, major, minor) => {
    const ellipse = confidenceEllipse(points, kind)
    expect(ellipse.semiMajorD).toBeCloseTo(major, 4)
    expect(ellipse.semiMinorD).toBeCloseTo(minor, 4)
    expect(ellipse.tiltDegrees).toBeCloseTo(10.14, 2)
    expect(ellipse.centre).toEqual(centroid.point)
  })
  it('holds all ten eyes inside the data ellipse and the origin outside the ellipse of the mean (T² 14.885 against 10.033)', () => {
    const squaredDistance = (kind: 'data-large' | 'centroid', point: { x: number, y: number }) => {
      const { centre, semiMajorD, semiMinorD, tiltDegrees } = confidenceEllipse(points, kind)
      const turn = tiltDegrees * Math.PI / 180
      const [dx, dy] = [point.x - centre.x, point.y - centre.y]
      return ((dx * Math.cos(turn) + dy * Math.sin(turn)) / semiMajorD) ** 2 + ((dy * Math.cos(turn) - dx * Math.sin(turn)) / semiMinorD) ** 2
    }
    expect(Math.max(...points.map(point => squaredDistance('data-large', point))) * 5.9915).toBeCloseTo(4.763, 3)
    expect(squaredDistance('centroid', { x: 0, y: 0 })).toBeCloseTo(14.885 / 10.033, 2)
  })
})
