import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { corneaGradeDefinitions, endothelialLossPercent, expectedClearByDay, outlastsExpectation, thicknessChangePercent } from '#shared/domain/review/cornea'
import { foldGrades, oedemaGrades } from '#shared/domain/review/vocabulary'

describe('cornea', () => {
  it('computes nothing from nothing', () => {
    expect(thicknessChangePercent(undefined, 600)).toBeUndefined()
    expect(thicknessChangePercent(550, undefined)).toBeUndefined()
    expect(endothelialLossPercent(2500, undefined)).toBeUndefined()
    expect(endothelialLossPercent(undefined, 2500)).toBeUndefined()
  })

  it.each([[0, 550], [550, 0], [299, 550], [550, 1201], [Number.NaN, 550], [0.55, 0.6]])('refuses thicknesses %d and %d', (before, after) => {
    expect(() => thicknessChangePercent(before, after)).toThrow(expect.objectContaining({ name: 'DomainError', code: 'review.cornea-out-of-range' }))
  })

  it.each([[0, 2000], [2000, 0], [2000, 5001], [Number.POSITIVE_INFINITY, 2000]])('refuses cell densities %d and %d', (before, after) => {
    expect(() => endothelialLossPercent(before, after)).toThrow(expect.objectContaining({ code: 'review.cornea-out-of-range' }))
  })

  it('names the field and the limit it refuses', () => {
    expect(() => thicknessChangePercent(550, 0.6)).toThrow(expect.objectContaining({ message: 'Enter 300 to 1200 micrometres.', fields: [{ field: 'cctUm', code: 'out-of-range', message: 'Enter 300 to 1200 micrometres.', limit: '300 to 1200 micrometres' }] }))
    expect(() => thicknessChangePercent(0.6, 550)).toThrow(expect.objectContaining({ fields: [expect.objectContaining({ field: 'preoperativeCctUm' })] }))
    expect(() => endothelialLossPercent(100, 2000)).toThrow(expect.objectContaining({ fields: [expect.objectContaining({ field: 'preoperativeCellsPerMm2', limit: '200 to 5000 cells per mm²' })] }))
    expect(() => endothelialLossPercent(2000, 100)).toThrow(expect.objectContaining({ fields: [expect.objectContaining({ field: 'cellsPerMm2' })] }))
  })

  it('gives back the second measurement from the first and the change', () => {
    fc.assert(fc.property(fc.integer({ min: 300, max: 1200 }), fc.integer({ min: 300, max: 1200 }), (before, after) => {
      const change = thicknessChangePercent(before, after)!
      expect(before * (1 + change / 100)).toBeCloseTo(after, 6)
      expect(Math.sign(change)).toBe(Math.sign(after - before))
    }))
    fc.assert(fc.property(fc.integer({ min: 200, max: 5000 }), fc.integer({ min: 200, max: 5000 }), (before, after) => {
      expect(before * (1 - endothelialLossPercent(before, after)! / 100)).toBeCloseTo(after, 6)
    }))
  })

  it('expects worse grades to take longer', () => {
    const days = ([0, 1, 2, 3] as const).map(grade => expectedClearByDay(grade)!)
    expect(days).toEqual([...days].sort((a, b) => a - b))
  })

  it('says when oedema outlasts its first grade', () => {
    expect(outlastsExpectation(2, 2, 9)).toBe(false)
    expect(outlastsExpectation(2, 1, 10)).toBe(true)
    expect(outlastsExpectation(2, 0, 40)).toBe(false)
    expect(outlastsExpectation(4, 3, 90)).toBeUndefined()
    expect(outlastsExpectation(0, 1, 3)).toBe(true)
  })

  it('defines every grade', () => {
    expect(Object.keys(corneaGradeDefinitions.oedema).map(Number)).toEqual([...oedemaGrades])
    expect(Object.keys(corneaGradeDefinitions.folds)).toEqual([...foldGrades])
  })
})
