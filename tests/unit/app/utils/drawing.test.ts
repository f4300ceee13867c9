import { describe, expect, it } from 'vitest'
import { cellSpecks, clockArc, clockPoint } from '../../../../app/utils/drawing'
import { gradeOptions } from '../../../../app/utils/grades'

describe('the clock face', () => {
  it('has twelve up, three at the right and nine at the left', () => {
    expect(clockPoint(12, 66, 88, 88)).toEqual({ x: 88, y: 22 })
    expect(clockPoint(3, 66, 88, 88)).toEqual({ x: 154, y: 88 })
    expect(clockPoint(9, 66, 88, 88)).toEqual({ x: 22, y: 88 })
  })

  it('draws an arc to both sides of its hour', () => {
    expect(clockArc(10, 58, 150, 92, 0.55)).toBe('M93.6 78.5A58 58 0 0 1 110.1 49.9')
  })
})

describe('the grades', () => {
  // Standardization of Uveitis Nomenclature, Am J Ophthalmol 2005;140:509-516: cells in a 1 mm beam.
  it('carry the published cell counts, in order', () => {
    expect(gradeOptions.cells.map(option => [option.value, option.definition])).toEqual([
      ['0', 'Fewer than 1 cell in a 1 mm beam'], ['0.5+', '1 to 5 cells'], ['1+', '6 to 15 cells'], ['2+', '16 to 25 cells'], ['3+', '26 to 50 cells'], ['4+', 'More than 50 cells'],
    ])
  })

  it('have one key each', () => {
    for (const options of Object.values(gradeOptions)) expect(new Set(options.map(option => option.key)).size).toBe(options.length)
    expect(gradeOptions.cells.map(option => option.key)).toEqual(['0', '5', '1', '2', '3', '4'])
  })

  it('show more specks with every grade of cells, within the counts of their definition', () => {
    const counts = cellSpecks.map(specks => specks.length)
    expect(counts).toEqual([...counts].sort((left, right) => left - right))
    expect(counts[0]).toBe(0)
    expect(counts[3]).toBeGreaterThanOrEqual(16)
    expect(counts[3]).toBeLessThanOrEqual(25)
    expect(counts[5]).toBeGreaterThan(50)
  })
})
