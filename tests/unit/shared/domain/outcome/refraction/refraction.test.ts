import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { inForm, sphericalEquivalentD, toCornealPlane, toSpectaclePlane, transpose, wrapAxis } from '#shared/domain/outcome/refraction'
import type { Refraction } from '#shared/domain/outcome/refraction'
import { astigmatismAt, cornealAstigmatism, doubleAngle, inducedAstigmatism } from '#shared/domain/outcome/refraction-astigmatism'
import { centroidOf, confidenceEllipse, ellipseKinds } from '#shared/domain/outcome/refraction-ellipse'
import { formatRefraction, parseRefraction } from '#shared/domain/outcome/refraction-notation'
import { addVectors, meanRefraction, powerVectorOf, refractionOf, subtractVectors } from '#shared/domain/outcome/refraction-vectors'
import { DomainError } from '#shared/domain/errors'

const errorOf = (act: () => unknown): DomainError => {
  try {
    act()
  }
  catch (error) {
    if (error instanceof DomainError) return error
    throw error
  }
  throw new Error('nothing was refused')
}

describe('reading what is typed', () => {
  it.each<[string, number, number, number]>([
    ['-2.00 / -1.50 x 180', -2, -1.5, 180], ['-2.00/-1.50x180', -2, -1.5, 180], ['−2.00 / −1.50 × 180', -2, -1.5, 180], ['-2 -1.5 x 90', -2, -1.5, 90],
    ['-1.25-0.50x90', -1.25, -0.5, 90], ['+1.00 / -2.25 @ 15°', 1, -2.25, 15], ['-2.00DS/-1.50DCx180', -2, -1.5, 180], ['+1.00 DS', 1, 0, 180],
    ['+0.25', 0.25, 0, 180], ['plano', 0, 0, 180], ['pl / -0.50 x 5', 0, -0.5, 5], ['Plano/-0.75 axis 100', 0, -0.75, 100], ['-1,25 -0,50 x 45', -1.25, -0.5, 45],
    ['+1.00, -0.50 x 90', 1, -0.5, 90], ['0.00 / -1.00 x 0', 0, -1, 180], ['-3.00 / 0.00', -3, 0, 180], ['-0.50/+0.75x100', -0.5, 0.75, 100], ['+.50 / -.25 x 7 deg', 0.5, -0.25, 7], ['- 2.00 / - 1.00 x 10', -2, -1, 10],
  ])('%s', (text, sphereD, cylinderD, axisDegrees) => {
    expect(parseRefraction(text)).toEqual({ sphereD, cylinderD, axisDegrees })
  })
  it.each([
    ['', 'required'], ['   ', 'required'], ['6/9', 'sign-missing'], ['1.25', 'sign-missing'], ['-2.00 / 1.50 x 180', 'sign-missing'], ['-2.00 / -1.50', 'axis-missing'],
    ['-2.00 / -1.50 x 190', 'axis-out-of-range'], ['-225', 'point-missing'], ['+1.00 / -150 x 90', 'point-missing'], ['-31.00', 'out-of-range'], ['-1.00 / -16.00 x 90', 'out-of-range'],
    ['good', 'unclear'], ['-2.00 x 90', 'unclear'], ['-12.50 x 90', 'unclear'], ['-2.00 / -1.50 180', 'unclear'], ['-2.0.0', 'unclear'], ['-2.00 / -1.50 x 90 x 80', 'unclear'], ['--2.00', 'unclear'], ['NaN', 'unclear'], ['-1e1', 'unclear'], ['-2.00 / -1.50 x -10', 'unclear'],
  ])('refuses "%s": %s', (text, kind) => {
    const error = errorOf(() => parseRefraction(text, 'refraction.right'))
    expect(error.code).toBe(`outcome.refraction-${kind}`)
    expect(error.fields[0]).toMatchObject({ field: 'refraction.right', code: kind })
  })
  it('never guesses and never gives a number that is not one, whatever was typed', () => {
    const scraps = fc.oneof(fc.string(), fc.array(fc.constantFrom('+', '-', '1', '25', '.', ' ', '/', 'x', 'pl', 'DS', '90', '180', ','), { maxLength: 9 }).map(each => each.join('')))
    fc.assert(fc.property(scraps, (text) => {
      try {
        const found = parseRefraction(text)
        expect(Math.abs(found.sphereD)).toBeLessThanOrEqual(30)
        expect(Math.abs(found.cylinderD)).toBeLessThanOrEqual(15)
        expect(found.axisDegrees > 0 && found.axisDegrees <= 180).toBe(true)
      }
      catch (error) {
        expect(error).toBeInstanceOf(DomainError)
      }
    }), { numRuns: 3000 })
  })
  it('refuses a very long entry quickly', () => {
    expect(errorOf(() => parseRefraction(`${'-1.00 '.repeat(20_000)}x`)).code).toBe('outcome.refraction-unclear')
  })
})

describe('writing', () => {
  it.each<[Refraction, string, string]>([
    [{ sphereD: -2, cylinderD: -1.5, axisDegrees: 180 }, '−2.00 / −1.50 × 180', '−3.50 / +1.50 × 90'],
    [{ sphereD: 0, cylinderD: -0.5, axisDegrees: 5 }, 'plano / −0.50 × 5', '−0.50 / +0.50 × 95'],
    [{ sphereD: 1, cylinderD: 0, axisDegrees: 30 }, '+1.00 DS', '+1.00 DS'], [{ sphereD: -0.001, cylinderD: 0, axisDegrees: 180 }, 'plano', 'plano'],
    [{ sphereD: -1, cylinderD: -0.001, axisDegrees: 20 }, '−1.00 DS', '−1.00 DS'], [{ sphereD: -1, cylinderD: -1, axisDegrees: 0.2 }, '−1.00 / −1.00 × 180', '−2.00 / +1.00 × 90'],
  ])('%j', (refraction, minus, plus) => {
    expect(formatRefraction(refraction)).toBe(minus)
    expect(formatRefraction(refraction, 'plus')).toBe(plus)
  })
})

const steps = (most: number) => fc.integer({ min: -most * 4, max: most * 4 }).map(each => each / 4)
/** Refractions as they are prescribed: quarter dioptres and whole degrees. */
const prescribed = fc.record({ sphereD: steps(12), cylinderD: steps(6), axisDegrees: fc.integer({ min: 1, max: 180 }) })
const same = (one: Refraction, other: Refraction) => {
  const [a, b] = [powerVectorOf(one), powerVectorOf(other)]
  return Math.abs(a.m - b.m) < 1e-9 && Math.abs(a.j0 - b.j0) < 1e-9 && Math.abs(a.j45 - b.j45) < 1e-9
}

describe('properties of refraction', () => {
  it('reads back what it writes, in either form', () => {
    fc.assert(fc.property(prescribed, fc.constantFrom('minus' as const, 'plus' as const), (refraction, form) => {
      expect(same(parseRefraction(formatRefraction(refraction, form)), refraction)).toBe(true)
    }), { numRuns: 500 })
  })
  it('is itself after two transpositions, and the same lens after one', () => {
    fc.assert(fc.property(prescribed, (refraction) => {
      expect(same(transpose(refraction), refraction)).toBe(true)
      expect(inForm(transpose(transpose(refraction)), 'minus')).toEqual(inForm(refraction, 'minus'))
      expect(sphericalEquivalentD(transpose(refraction))).toBeCloseTo(sphericalEquivalentD(refraction), 9)
    }))
  })
  it('comes back from its power vector and from the cornea', () => {
    fc.assert(fc.property(prescribed, fc.double({ min: 0, max: 20, noNaN: true }), (refraction, vertexMm) => {
      expect(same(refractionOf(powerVectorOf(refraction)), refraction)).toBe(true)
      expect(same(toSpectaclePlane(toCornealPlane(refraction, vertexMm), vertexMm), refraction)).toBe(true)
    }))
  })
  it('weakens minus and strengthens plus at the cornea, and treats both cylinder forms alike', () => {
    fc.assert(fc.property(prescribed, (refraction) => {
      expect(toCornealPlane({ ...refraction, cylinderD: 0 }).sphereD).toBeGreaterThanOrEqual(refraction.sphereD)
      expect(same(toCornealPlane(transpose(refraction)), toCornealPlane(refraction))).toBe(true)
    }))
  })
  it('takes away what it added', () => {
    fc.assert(fc.property(prescribed, prescribed, (one, other) => {
      const [a, b] = [powerVectorOf(one), powerVectorOf(other)]
      const back = subtractVectors(addVectors(a, b), b)
      expect(back.m).toBeCloseTo(a.m, 9)
      expect(back.j0).toBeCloseTo(a.j0, 9)
      expect(back.j45).toBeCloseTo(a.j45, 9)
    }))
  })
  it('mirrors: the mean of an eye and its mirror image lies at 90 or 180 degrees or has no cylinder', () => {
    fc.assert(fc.property(prescribed, (refraction) => {
      const mean = meanRefraction([refraction, { ...refraction, axisDegrees: 180 - refraction.axisDegrees }])
      expect(mean.cylinderD === 0 || Math.abs(Math.sin(2 * mean.axisDegrees * Math.PI / 180)) < 1e-6).toBe(true)
    }))
  })
  it('keeps any axis in 0 < a <= 180', () => {
    fc.assert(fc.property(fc.double({ min: -1e6, max: 1e6, noNaN: true }), (degrees) => {
      const wrapped = wrapAxis(degrees)
      expect(wrapped > 0 && wrapped <= 180).toBe(true)
      expect(Math.abs(Math.sin((wrapped - degrees) * Math.PI / 180))).toBeLessThan(1e-6)
    }))
    expect([0, 180, 360, -90, 90, 270, 181].map(wrapAxis)).toEqual([180, 180, 180, 90, 90, 90, 1])
  })
})

const astigmatisms = fc.record({ magnitudeD: fc.double({ min: 0, max: 8, noNaN: true }), steepDegrees: fc.double({ min: 0, max: 180, noNaN: true }) })

describe('properties of astigmatism', () => {
  it('adds the induced astigmatism to the first and gets the second', () => {
    fc.assert(fc.property(astigmatisms, astigmatisms, (before, after) => {
      const { point } = inducedAstigmatism(before, after)
      const from = doubleAngle(before)
      const to = doubleAngle(after)
      expect(from.x + point.x).toBeCloseTo(to.x, 9)
      expect(from.y + point.y).toBeCloseTo(to.y, 9)
    }))
  })
  it('comes back from the plot', () => {
    fc.assert(fc.property(astigmatisms.filter(each => each.magnitudeD > 0.01), (given) => {
      const back = astigmatismAt(doubleAngle(given))
      expect(back.magnitudeD).toBeCloseTo(given.magnitudeD, 9)
      expect(Math.abs(Math.sin((back.steepDegrees - given.steepDegrees) * Math.PI / 180))).toBeLessThan(1e-6)
    }))
  })
  it('is never smaller than the change of magnitude, and never larger than both together', () => {
    fc.assert(fc.property(astigmatisms, astigmatisms, (before, after) => {
      const { magnitudeD } = inducedAstigmatism(before, after)
      expect(magnitudeD).toBeGreaterThanOrEqual(Math.abs(before.magnitudeD - after.magnitudeD) - 1e-8)
      expect(magnitudeD).toBeLessThanOrEqual(before.magnitudeD + after.magnitudeD + 1e-8)
    }))
  })
  it('finds the steep meridian whichever K it is', () => {
    expect(cornealAstigmatism({ k1D: 43, k1AxisDegrees: 8, k2D: 44.5, k2AxisDegrees: 98 })).toEqual({ magnitudeD: 1.5, steepDegrees: 98 })
    expect(cornealAstigmatism({ k1D: 44.5, k1AxisDegrees: 98, k2D: 43, k2AxisDegrees: 8 })).toEqual({ magnitudeD: 1.5, steepDegrees: 98 })
  })
  it('draws an ellipse that turns with its points and has the long axis first', () => {
    fc.assert(fc.property(fc.array(astigmatisms, { minLength: 4, maxLength: 30 }), (given) => {
      const points = given.map(each => doubleAngle(each))
      for (const kind of ellipseKinds) {
        const ellipse = confidenceEllipse(points, kind)
        const mirrored = confidenceEllipse(points.map(({ x, y }) => ({ x, y: -y })), kind)
        expect(ellipse.semiMajorD).toBeGreaterThanOrEqual(ellipse.semiMinorD)
        expect(mirrored.semiMajorD).toBeCloseTo(ellipse.semiMajorD, 6)
        expect(ellipse.tiltDegrees >= 0 && ellipse.tiltDegrees <= 180).toBe(true)
      }
    }))
  })
})

describe('refusals with a field and a limit', () => {
  const good: Refraction = { sphereD: -1, cylinderD: -1, axisDegrees: 90 }
  it.each<[string, () => unknown, string, string]>([
    ['a sphere of 31 D', () => transpose({ ...good, sphereD: 31 }), 'outcome.refraction-out-of-range', 'refraction.sphereD'],
    ['a cylinder that is not a number', () => powerVectorOf({ ...good, cylinderD: NaN }), 'outcome.refraction-out-of-range', 'refraction.cylinderD'],
    ['an axis of 181', () => sphericalEquivalentD({ ...good, axisDegrees: 181 }), 'outcome.refraction-out-of-range', 'refraction.axisDegrees'],
    ['no refraction', () => formatRefraction(undefined as unknown as Refraction), 'outcome.refraction-out-of-range', 'refraction.sphereD'],
    ['a vertex distance of 12 cm', () => toCornealPlane(good, 120), 'outcome.vertex-out-of-range', 'vertexMm'],
    ['a lens without an image', () => toCornealPlane({ sphereD: 30, cylinderD: 15, axisDegrees: 90 }, 30), 'outcome.vertex-no-image', 'refraction.sphereD'],
    ['a vector that is not one', () => refractionOf({ m: 0, j0: Infinity, j45: 0 }), 'outcome.vector-out-of-range', 'vector'],
    ['no refractions to average', () => meanRefraction([]), 'outcome.too-few-refractions', 'refractions'],
    ['a negative astigmatism', () => inducedAstigmatism({ magnitudeD: -1, steepDegrees: 90 }, { magnitudeD: 1, steepDegrees: 90 }), 'outcome.astigmatism-out-of-range', 'before.magnitudeD'],
    ['a steep meridian of 200', () => inducedAstigmatism({ magnitudeD: 1, steepDegrees: 90 }, { magnitudeD: 1, steepDegrees: 200 }), 'outcome.astigmatism-out-of-range', 'after.steepDegrees'],
    ['one eye for a centroid', () => centroidOf([{ x: 0, y: 0 }]), 'outcome.too-few-eyes', 'points'],
    ['two eyes for an ellipse', () => confidenceEllipse([{ x: 0, y: 0 }, { x: 1, y: 0 }], 'data'), 'outcome.too-few-eyes', 'points'],
    ['a point that is not one', () => centroidOf([{ x: 0, y: 0 }, { x: NaN, y: 0 }]), 'outcome.point-out-of-range', 'points.1'],
    ['an ellipse of no name', () => confidenceEllipse([{ x: 0, y: 0 }, { x: 1, y: 0 }, { x: 0, y: 1 }], 'mine' as 'data'), 'outcome.ellipse-unknown', 'kind'],
  ])('%s', (_, act, code, field) => {
    const error = errorOf(act)
    expect(error.code).toBe(code)
    const problem = error.fields.find(each => each.field === field)!
    expect(problem.message.length).toBeGreaterThan(10)
    expect(problem.limit).toBeTruthy()
  })
})
