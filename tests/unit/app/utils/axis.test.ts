import { describe, expect, it } from 'vitest'
import fc from 'fast-check'
import { daysTicks, daysToPercent, linearToPercent, minutesLeftTicks, minutesLeftToPercent, nameLevels, nameWidth, type DaysAxisWidth } from '../../../../app/utils/axis'

const widths: DaysAxisWidth[] = ['wide', 'middle', 'narrow']

describe('the days axis', () => {
  it('puts surgery at 42 % at every width', () => {
    expect(widths.map(width => daysToPercent(0, width))).toEqual([42, 42, 42])
  })

  // The stretch as the design states it: the last twelve weeks to one week, the last week, day one, the first week.
  it('gives the last week 11 %, day one 8 % and the first week 15 %', () => {
    expect(daysToPercent(-7)).toBe(31)
    expect(daysToPercent(0) - daysToPercent(-7)).toBe(11)
    expect(daysToPercent(1) - daysToPercent(0)).toBe(8)
    expect(daysToPercent(7) - daysToPercent(1)).toBe(15)
  })

  it('draws days between the anchors in proportion', () => {
    expect(daysToPercent(8)).toBe(66.5)
    expect(daysToPercent(22)).toBe(82.93)
    expect(daysToPercent(-19)).toBe(24.14)
    expect(daysToPercent(8, 'narrow')).toBe(68.29)
  })

  it('never moves a later day to the left, and never leaves the drawing', () => {
    fc.assert(fc.property(fc.integer({ min: -2000, max: 2000 }), fc.integer({ min: 0, max: 400 }), fc.constantFrom(...widths), (day, later, width) => {
      const [left, right] = [daysToPercent(day, width), daysToPercent(day + later, width)]
      expect(right).toBeGreaterThanOrEqual(left)
      expect(left).toBeGreaterThanOrEqual(0)
      expect(right).toBeLessThanOrEqual(100)
    }))
  })

  it('keeps two stragglers beyond six weeks apart', () => {
    expect(daysToPercent(90)).toBeGreaterThan(daysToPercent(50))
  })

  it('labels ticks in plain words, in order', () => {
    expect(daysTicks().map(tick => tick.label)).toEqual(['12 weeks', '4 weeks', '1 week', 'day 1', '1 week', '2 weeks', '4 weeks', '6 weeks'])
    for (const width of widths) {
      const places = daysTicks(width).map(tick => tick.percent)
      expect(places).toEqual([...places].sort((left, right) => left - right))
    }
  })
})

describe('the time-left axis', () => {
  it('stretches the first hour over more than a third', () => {
    expect(minutesLeftToPercent(45)).toBe(28.67)
    expect(minutesLeftToPercent(60)).toBe(36)
    expect(minutesLeftToPercent(474)).toBe(67.68)
  })

  it('pins what is overdue to zero', () => {
    expect(minutesLeftToPercent(-12)).toBe(0)
  })

  it('moves the end of the day as the day passes and drops the tick that it would cover', () => {
    const morning = minutesLeftTicks(474)
    expect(morning.map(tick => tick.label)).toEqual(['now', '15 min', '1 hour', '4 hours', 'end of day', '2 days', '5 working days'])
    const afternoon = minutesLeftTicks(70)
    expect(afternoon.map(tick => tick.label)).toContain('end of day')
    expect(afternoon.map(tick => tick.label)).not.toContain('1 hour')
  })

  it('names no end of day once it has passed', () => {
    expect(minutesLeftTicks(-5).map(tick => tick.label)).not.toContain('end of day')
    expect(minutesLeftTicks(null)).toHaveLength(6)
  })

  it('keeps ticks far enough apart to be read at any time of day', () => {
    fc.assert(fc.property(fc.integer({ min: 1, max: 1440 }), (minutes) => {
      const places = minutesLeftTicks(minutes).map(tick => tick.percent)
      for (let index = 1; index < places.length; index++) expect(places[index]! - places[index - 1]!).toBeGreaterThanOrEqual(9)
    }))
  })
})

describe('a plain line', () => {
  it('runs from edge to edge, keeps its margin, and holds what lies outside', () => {
    expect(linearToPercent(546, 500, 700)).toBe(23)
    expect(linearToPercent(500, 500, 700, 2)).toBe(2)
    expect(linearToPercent(900, 500, 700, 2)).toBe(98)
  })

  it('answers the middle when it has no length', () => {
    expect(linearToPercent(3, 5, 5)).toBe(50)
  })
})

describe('names over a line', () => {
  const at = (percent: number, width = 5) => ({ percent, width })

  it('stand on the line while there is room, then one step up, then not at all', () => {
    expect(nameLevels([at(5), at(20)])).toEqual([0, 0])
    expect(nameLevels([at(5), at(7), at(8)])).toEqual([0, 1, null])
  })

  it('lift a close neighbour when air is asked for', () => {
    expect(nameLevels([at(5), at(11)], false)).toEqual([0, 0])
    expect(nameLevels([at(5), at(11)], true)).toEqual([0, 1])
  })

  it('never overlap on one level', () => {
    fc.assert(fc.property(fc.array(fc.record({ percent: fc.double({ min: 0, max: 100, noNaN: true }), width: fc.double({ min: 1, max: 12, noNaN: true }) })), fc.boolean(), (names, airy) => {
      const sorted = [...names].sort((left, right) => left.percent - right.percent)
      const levels = nameLevels(sorted, airy)
      for (const level of [0, 1]) {
        const here = sorted.filter((_, index) => levels[index] === level)
        for (let index = 1; index < here.length; index++) expect(here[index]!.percent - here[index - 1]!.percent).toBeGreaterThanOrEqual((here[index]!.width + here[index - 1]!.width) / 2)
      }
    }))
  })

  it('are wider on a shorter line', () => {
    expect(nameWidth('Rosalind', 600)).toBeGreaterThan(nameWidth('Rosalind', 1200))
  })
})
