import { Temporal } from 'temporal-polyfill'
import { DomainError } from '#shared/domain/errors'

/** A part of a course with the same number of doses every day. */
export interface DropStep { dosesPerDay: number, days: number }

/** One bottle's worth of instructions: a name and its steps, one after the other. */
export interface DropCourse {
  name: string
  /** First day of drops at the site's calendar, `YYYY-MM-DD`. Often the day after surgery; before it for some. */
  startsOn: string
  steps: readonly DropStep[]
}

export interface DropDay {
  date: string
  doses: { name: string, dosesPerDay: number }[]
  total: number
}

export interface DoseChange { date: string, name: string, from: number, to: number }

export interface BottleFacts {
  /** About 20 drops in a millilitre (common practice). */
  dropsPerMl: number
  bottleMl: number
  /** An opened bottle is thrown away after this many days, counting the day it was opened (common practice). */
  keepsDays: number
  /** 1 for one eye; more where some are expected to miss. */
  dropsPerDose: number
}

export const usualBottle: BottleFacts = { dropsPerMl: 20, bottleMl: 5, keepsDays: 28, dropsPerDose: 1 }

export const dropLimits = { dosesPerDay: 24, days: 365, steps: 20 } as const

function refuse(field: string, code: string, message: string, limit?: string): never {
  throw new DomainError('messaging.drops-invalid', message, { fields: [{ field, code, message, ...(limit ? { limit } : {}) }] })
}

function dateOf(text: string, field: string): Temporal.PlainDate {
  try {
    return Temporal.PlainDate.from(text, { overflow: 'reject' })
  }
  catch {
    return refuse(field, 'invalid', 'Enter the first day of drops as a date.')
  }
}

function isWholeWithin(value: number, most: number): boolean {
  return Number.isSafeInteger(value) && value >= 1 && value <= most
}

function assertCourse(course: DropCourse): void {
  if (course.name.trim() === '') refuse('name', 'required', 'Enter the name of the drops.')
  if (course.steps.length === 0 || course.steps.length > dropLimits.steps) refuse('steps', 'out-of-range', 'Enter at least one step.', `${dropLimits.steps} steps`)
  course.steps.forEach((step, index) => {
    if (!isWholeWithin(step.dosesPerDay, dropLimits.dosesPerDay)) refuse(`steps.${index}.dosesPerDay`, 'out-of-range', 'Enter whole doses a day, 1 to 24.', '1 to 24')
    if (!isWholeWithin(step.days, dropLimits.days)) refuse(`steps.${index}.days`, 'out-of-range', 'Enter whole days, 1 to 365.', '1 to 365')
  })
}

/**
 * A taper that loses one dose a day at every step down to one: `taper(4, 7)` is 4-3-2-1 by the week, the steroid of
 * Wielders et al. 2018 (ESCRS PREMED report 1).
 * @throws DomainError `messaging.drops-invalid`
 */
export function taper(fromDosesPerDay: number, daysPerStep: number): DropStep[] {
  if (!isWholeWithin(fromDosesPerDay, dropLimits.steps)) refuse('dosesPerDay', 'out-of-range', 'A taper starts at 1 to 20 doses a day.', '1 to 20')
  if (!isWholeWithin(daysPerStep, dropLimits.days)) refuse('days', 'out-of-range', 'Enter whole days, 1 to 365.', '1 to 365')
  return Array.from({ length: fromDosesPerDay }, (_, index) => ({ dosesPerDay: fromDosesPerDay - index, days: daysPerStep }))
}

/** Doses on each day of a course, its first day first. @throws DomainError `messaging.drops-invalid` */
export function dailyDoses(course: DropCourse): { date: string, dosesPerDay: number }[] {
  assertCourse(course)
  const first = dateOf(course.startsOn, 'startsOn')
  return course.steps.flatMap(step => Array.from({ length: step.days }, () => step.dosesPerDay))
    .map((dosesPerDay, index) => ({ date: first.add({ days: index }).toString(), dosesPerDay }))
}

/** Everything to be used, day by day, over all courses; days without drops between courses are left out. */
export function planDrops(courses: readonly DropCourse[]): DropDay[] {
  const days = new Map<string, DropDay>()
  for (const course of courses) {
    for (const { date, dosesPerDay } of dailyDoses(course)) {
      const day = days.get(date) ?? { date, doses: [], total: 0 }
      day.doses.push({ name: course.name, dosesPerDay })
      day.total += dosesPerDay
      days.set(date, day)
    }
  }
  return [...days.values()].sort((a, b) => a.date.localeCompare(b.date))
}

/** Last day of a course, included: 28 days from 28 March end on 24 April. */
export function lastDayOf(course: DropCourse): string {
  return dailyDoses(course).at(-1)!.date
}

export function totalDoses(course: DropCourse): number {
  return dailyDoses(course).reduce((sum, day) => sum + day.dosesPerDay, 0)
}

/** Every day on which a course changes, the day after its last one included (`to` is 0). */
export function doseChanges(course: DropCourse): DoseChange[] {
  const days = dailyDoses(course)
  const after = Temporal.PlainDate.from(days.at(-1)!.date).add({ days: 1 }).toString()
  return [...days.slice(1), { date: after, dosesPerDay: 0 }]
    .map(({ date, dosesPerDay }, index) => ({ date, name: course.name, from: days[index]!.dosesPerDay, to: dosesPerDay }))
    .filter(change => change.from !== change.to)
}

/** The days on which fewer doses begin, or a course has ended, once each: the days of `drops.change`. */
export function stepDownDates(courses: readonly DropCourse[]): string[] {
  return [...new Set(courses.flatMap(course => doseChanges(course)).filter(change => change.to < change.from).map(change => change.date))].sort()
}

/**
 * Bottles for a course: a new one when the last is empty or has been open too long.
 * @throws DomainError `messaging.drops-invalid` when a bottle does not hold one day's drops
 */
export function bottlesFor(course: DropCourse, bottle: BottleFacts = usualBottle): number {
  const holds = Math.floor(bottle.dropsPerMl * bottle.bottleMl)
  const days = dailyDoses(course)
  const most = Math.max(...days.map(day => day.dosesPerDay * bottle.dropsPerDose))
  if (!(holds >= most) || !(bottle.keepsDays >= 1)) refuse('bottle', 'out-of-range', 'A bottle holds at least the drops of one day and keeps for at least one.')
  let bottles = 0
  let left = 0
  let openDays = 0
  for (const { dosesPerDay } of days) {
    const needed = dosesPerDay * bottle.dropsPerDose
    if (bottles === 0 || openDays >= bottle.keepsDays) {
      bottles += 1
      left = holds
      openDays = 0
    }
    if (needed > left) {
      // The rest of the day comes from the next bottle.
      bottles += 1
      left += holds
      openDays = 0
    }
    left -= needed
    openDays += 1
  }
  return bottles
}
