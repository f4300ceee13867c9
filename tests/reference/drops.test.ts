import { describe, expect, it } from 'vitest'
import { bottlesFor, dailyDoses, lastDayOf, planDrops, stepDownDates, taper, totalDoses } from '#shared/domain/messaging/drops'
import type { DropCourse, DropStep } from '#shared/domain/messaging/drops'

const course = (name: string, steps: readonly DropStep[], startsOn = '2026-03-28'): DropCourse => ({ name, startsOn, steps })
const weekly = (doses: number[]) => Array.from({ length: Math.ceil(doses.length / 7) }, (_, week) => doses.slice(week * 7, week * 7 + 7).reduce((sum, count) => sum + count, 0))

const steroid = course('steroid', taper(4, 7))
const antibiotic = course('antibiotic', [{ dosesPerDay: 4, days: 7 }])
const nsaid = course('anti-inflammatory', [{ dosesPerDay: 3, days: 28 }])

describe('drops after surgery', () => {
  // Schedules: steroid 4-3-2-1 by the week, Wielders et al. 2018 (ESCRS PREMED report 1); prednisolone 3 then 2 a day,
  // Chang, Tan, Tripodis 2011; bromfenac twice daily for 2 weeks from 2 days before surgery, PREMED; the rest common practice. Sums by hand.
  it.each([
    ['steroid 4-3-2-1', taper(4, 7), [28, 21, 14, 7], 70],
    ['antibiotic 4 a day, 7 days', [{ dosesPerDay: 4, days: 7 }], [28], 28],
    ['antibiotic 4 a day, 14 days', [{ dosesPerDay: 4, days: 14 }], [28, 28], 56],
    ['NSAID 3 a day, 28 days', [{ dosesPerDay: 3, days: 28 }], [21, 21, 21, 21], 84],
    ['NSAID once, 28 days', [{ dosesPerDay: 1, days: 28 }], [7, 7, 7, 7], 28],
    ['bromfenac 2 a day, 16 days', [{ dosesPerDay: 2, days: 16 }], [14, 14, 4], 32],
    ['fixed combination 4 a day, 28 days', [{ dosesPerDay: 4, days: 28 }], [28, 28, 28, 28], 112],
    ['prednisolone 3 then 2', [{ dosesPerDay: 3, days: 14 }, { dosesPerDay: 2, days: 14 }], [21, 21, 14, 14], 70],
    ['prednisolone 3 then 2 for three weeks', [{ dosesPerDay: 3, days: 14 }, { dosesPerDay: 2, days: 21 }], [21, 21, 14, 14, 14], 84],
  ])('%s: %j a week, %d in all', (name, steps, weeks, total) => {
    const planned = course(name, steps)
    expect(weekly(dailyDoses(planned).map(day => day.dosesPerDay))).toEqual(weeks)
    expect(totalDoses(planned)).toBe(total)
  })

  it('adds three courses to 11, 6, 5 and 4 a day: 182 drops', () => {
    const days = planDrops([antibiotic, steroid, nsaid])
    expect([0, 7, 14, 21].map(day => days[day]?.total)).toEqual([11, 6, 5, 4])
    expect(weekly(days.map(day => day.total))).toEqual([77, 42, 35, 28])
    expect(days.reduce((sum, day) => sum + day.total, 0)).toBe(182)
  })

  // Calendar arithmetic by hand.
  it.each([['2026-03-28', 28, '2026-04-24'], ['2026-03-28', 1, '2026-03-28'], ['2028-02-01', 29, '2028-02-29'], ['2026-10-20', 14, '2026-11-02'], ['2026-12-20', 28, '2027-01-16']])('a course from %s for %d days ends on %s', (startsOn, days, last) => {
    expect(lastDayOf(course('drops', [{ dosesPerDay: 4, days }], startsOn))).toBe(last)
  })

  it('steps down on the first day of each week and the day after the end', () => {
    expect(stepDownDates([steroid])).toEqual(['2026-04-04', '2026-04-11', '2026-04-18', '2026-04-25'])
    expect(stepDownDates([antibiotic, steroid, nsaid])).toEqual(['2026-04-04', '2026-04-11', '2026-04-18', '2026-04-25'])
  })

  // About 20 drops per mL, 5 mL = about 100 drops; discard 28 days after opening: common practice. Counts by hand.
  it.each([
    ['70 drops in 28 days', taper(4, 7), 1], ['100 drops in 25 days', [{ dosesPerDay: 4, days: 25 }], 1], ['104 drops in 26 days', [{ dosesPerDay: 4, days: 26 }], 2],
    ['112 drops in 28 days', [{ dosesPerDay: 4, days: 28 }], 2], ['84 drops in 35 days: open too long', [{ dosesPerDay: 3, days: 14 }, { dosesPerDay: 2, days: 21 }], 2],
    ['29 drops in 29 days', [{ dosesPerDay: 1, days: 29 }], 2], ['28 drops in 28 days', [{ dosesPerDay: 1, days: 28 }], 1], ['hourly for 9 days: 216 drops', [{ dosesPerDay: 24, days: 9 }], 3],
  ])('%s takes %s bottles', (name, steps, bottles) => {
    expect(bottlesFor(course(name, steps))).toBe(bottles)
  })
})
