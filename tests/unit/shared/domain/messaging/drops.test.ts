import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { bottlesFor, dailyDoses, doseChanges, lastDayOf, planDrops, stepDownDates, taper, totalDoses, usualBottle } from '#shared/domain/messaging/drops'
import type { DropCourse } from '#shared/domain/messaging/drops'

const good: DropCourse = { name: 'steroid', startsOn: '2026-03-28', steps: taper(4, 7) }
const dayMs = 86_400_000
const anyCourse: fc.Arbitrary<DropCourse> = fc.record({
  name: fc.constantFrom('a', 'b', 'c'),
  startsOn: fc.integer({ min: 0, max: 20_000 }).map(days => new Date(days * dayMs).toISOString().slice(0, 10)),
  steps: fc.array(fc.record({ dosesPerDay: fc.integer({ min: 1, max: 24 }), days: fc.integer({ min: 1, max: 60 }) }), { minLength: 1, maxLength: 6 }),
})

describe('drops', () => {
  it('goes down by one', () => {
    expect(taper(3, 5)).toEqual([{ dosesPerDay: 3, days: 5 }, { dosesPerDay: 2, days: 5 }, { dosesPerDay: 1, days: 5 }])
  })

  it('says who uses what on each day, and each change', () => {
    const short: DropCourse = { name: 'steroid', startsOn: '2026-03-28', steps: [{ dosesPerDay: 2, days: 2 }, { dosesPerDay: 1, days: 1 }] }
    const other: DropCourse = { name: 'antibiotic', startsOn: '2026-03-27', steps: [{ dosesPerDay: 4, days: 2 }] }
    expect(planDrops([short, other])).toEqual([
      { date: '2026-03-27', doses: [{ name: 'antibiotic', dosesPerDay: 4 }], total: 4 },
      { date: '2026-03-28', doses: [{ name: 'steroid', dosesPerDay: 2 }, { name: 'antibiotic', dosesPerDay: 4 }], total: 6 },
      { date: '2026-03-29', doses: [{ name: 'steroid', dosesPerDay: 2 }], total: 2 },
      { date: '2026-03-30', doses: [{ name: 'steroid', dosesPerDay: 1 }], total: 1 },
    ])
    expect(doseChanges(short)).toEqual([{ date: '2026-03-30', name: 'steroid', from: 2, to: 1 }, { date: '2026-03-31', name: 'steroid', from: 1, to: 0 }])
    expect(stepDownDates([short, other])).toEqual(['2026-03-29', '2026-03-30', '2026-03-31'])
    expect(planDrops([])).toEqual([])
  })

  it('counts bottles at their limits', () => {
    const one = (dosesPerDay: number, days: number): DropCourse => ({ ...good, steps: [{ dosesPerDay, days }] })
    expect(bottlesFor(one(20, 1), { ...usualBottle, bottleMl: 1 })).toBe(1)
    expect(bottlesFor(one(20, 3), { ...usualBottle, bottleMl: 1 })).toBe(3)
    expect(bottlesFor(one(1, 3), { ...usualBottle, keepsDays: 1 })).toBe(3)
    expect(() => bottlesFor({ ...good, steps: [{ dosesPerDay: 1, days: 1 }, { dosesPerDay: 21, days: 1 }] }, { ...usualBottle, bottleMl: 1 })).toThrow(expect.objectContaining({ code: 'messaging.drops-invalid' }))
    expect(() => bottlesFor(one(11, 1), { ...usualBottle, bottleMl: 1, dropsPerDose: 2 })).toThrow(expect.objectContaining({ code: 'messaging.drops-invalid' }))
    expect(dailyDoses({ ...good, steps: taper(20, 1) })).toHaveLength(20)
    expect(() => dailyDoses({ ...good, steps: [...taper(20, 1), { dosesPerDay: 1, days: 1 }] })).toThrow(expect.objectContaining({ fields: [{ field: 'steps', code: 'out-of-range', message: 'Enter at least one step.', limit: '20 steps' }] }))
  })

  it.each([
    ['name', { name: '  ' }], ['steps', { steps: [] }], ['steps.0.dosesPerDay', { steps: [{ dosesPerDay: 0, days: 7 }] }], ['steps.0.dosesPerDay', { steps: [{ dosesPerDay: 25, days: 7 }] }],
    ['steps.1.days', { steps: [{ dosesPerDay: 4, days: 7 }, { dosesPerDay: 3, days: 0 }] }], ['steps.0.days', { steps: [{ dosesPerDay: 4, days: 1.5 }] }], ['steps.0.days', { steps: [{ dosesPerDay: 4, days: Number.NaN }] }],
    ['startsOn', { startsOn: 'tomorrow' }], ['startsOn', { startsOn: '2026-02-30' }],
  ])('refuses a course with a wrong %s', (field, wrong) => {
    expect(() => dailyDoses({ ...good, ...wrong })).toThrow(expect.objectContaining({ name: 'DomainError', code: 'messaging.drops-invalid', fields: [expect.objectContaining({ field })] }))
  })

  it('refuses impossible tapers and bottles', () => {
    for (const [doses, days] of [[0, 7], [21, 7], [4, 0], [2.5, 7]] as const) expect(() => taper(doses, days)).toThrow(expect.objectContaining({ code: 'messaging.drops-invalid' }))
    for (const bottle of [{ ...usualBottle, bottleMl: 0 }, { ...usualBottle, keepsDays: 0 }, { ...usualBottle, dropsPerMl: Number.NaN }]) {
      expect(() => bottlesFor(good, bottle)).toThrow(expect.objectContaining({ code: 'messaging.drops-invalid' }))
    }
  })

  it('plans every day once, in order, and loses no dose', () => {
    fc.assert(fc.property(fc.array(anyCourse, { maxLength: 4 }), (courses) => {
      const days = planDrops(courses)
      expect(days.map(day => day.date)).toEqual([...new Set(days.map(day => day.date))].sort())
      expect(days.reduce((sum, day) => sum + day.total, 0)).toBe(courses.reduce((sum, course) => sum + totalDoses(course), 0))
    }))
  })

  it('counts days as a second calendar does', () => {
    fc.assert(fc.property(anyCourse, (course) => {
      const days = course.steps.reduce((sum, step) => sum + step.days, 0)
      expect(lastDayOf(course)).toBe(new Date(Date.parse(course.startsOn) + (days - 1) * dayMs).toISOString().slice(0, 10))
      expect(totalDoses(course)).toBe(course.steps.reduce((sum, step) => sum + step.days * step.dosesPerDay, 0))
    }))
  })

  it('changes from the first dose down to none', () => {
    fc.assert(fc.property(anyCourse, (course) => {
      const changes = doseChanges(course)
      expect(changes.at(-1)?.to).toBe(0)
      expect(course.steps[0]!.dosesPerDay + changes.reduce((sum, change) => sum + change.to - change.from, 0)).toBe(0)
      expect(stepDownDates([course]).every(date => date > course.startsOn)).toBe(true)
    }))
    expect(stepDownDates([{ ...good, steps: [{ dosesPerDay: 2, days: 3 }, { dosesPerDay: 4, days: 3 }] }])).toEqual(['2026-04-03'])
  })

  it('never runs dry, and needs no more than a bottle for each day', () => {
    fc.assert(fc.property(anyCourse, fc.integer({ min: 2, max: 10 }), (course, bottleMl) => {
      const bottle = { ...usualBottle, bottleMl }
      const days = course.steps.reduce((sum, step) => sum + step.days, 0)
      const bottles = bottlesFor(course, bottle)
      expect(bottles).toBeGreaterThanOrEqual(Math.ceil(totalDoses(course) / (20 * bottleMl)))
      expect(bottles).toBeGreaterThanOrEqual(Math.ceil(days / 28))
      expect(bottles).toBeLessThanOrEqual(days)
      expect(bottlesFor(course, { ...bottle, dropsPerDose: 1.5 })).toBeGreaterThanOrEqual(bottles)
    }))
  })
})
