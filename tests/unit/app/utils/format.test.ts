import { describe, expect, it } from 'vitest'
import { ageInYears, capitalise, countOf, countWord, formatDate, formatDay, formatDayTime, formatDaysFromSurgery, formatDioptres, formatFullDate, formatLongDay, formatMoment, formatTelephone, formatTime, formatTimeLeft, minutesUntil, timeLeftParts } from '../../../../app/utils/format'

const nineOhSix = '2026-10-15T08:06:00Z'

describe('dates and times', () => {
  it('write the day as Thu 15 October and the time on the 24-hour clock of the site', () => {
    expect(formatDay(nineOhSix)).toBe('Thu 15 October')
    expect(formatLongDay(nineOhSix)).toBe('Thursday 15 October')
    expect(formatDate(nineOhSix)).toBe('15 October')
    expect(formatTime(nineOhSix)).toBe('09:06')
    expect(formatDayTime('2026-10-15T16:30:00Z')).toBe('Thu 15 October 17:30')
  })

  it('follow the clock change of 25 October 2026', () => {
    expect(formatTime('2026-10-25T00:30:00Z')).toBe('01:30')
    expect(formatTime('2026-10-25T01:30:00Z')).toBe('01:30')
    expect(formatTime('2026-10-26T09:00:00Z')).toBe('09:00')
  })

  it('leave a birth date on its own day in any zone', () => {
    expect(formatFullDate('1955-02-03')).toBe('3 February 1955')
    expect(formatFullDate('1955-02-03', 'America/Los_Angeles')).toBe('3 February 1955')
  })

  it('say Today on the day itself', () => {
    expect(formatMoment('2026-10-15T06:12:00Z', nineOhSix)).toBe('Today 07:12')
    expect(formatMoment('2026-10-07T15:30:00Z', nineOhSix)).toBe('7 October 16:30')
  })

  it('count an age on the day, not on the year', () => {
    expect(ageInYears('1955-02-03', nineOhSix)).toBe(71)
    expect(ageInYears('1955-10-15', nineOhSix)).toBe(71)
    expect(ageInYears('1955-10-16', nineOhSix)).toBe(70)
  })
})

describe('time left', () => {
  it('is written in words that can be spoken', () => {
    expect(formatTimeLeft(45)).toBe('45 min')
    expect(formatTimeLeft(474)).toBe('7 h 54')
    expect(formatTimeLeft(485)).toBe('8 h 05')
    expect(formatTimeLeft(120)).toBe('2 h')
    expect(formatTimeLeft(3 * 1440)).toBe('3 days')
  })

  it('says how far it is over', () => {
    expect(formatTimeLeft(-12)).toBe('12 min over')
    expect(timeLeftParts(-75)).toEqual({ figure: '1', unit: 'h 15 over', over: true })
  })

  it('shows a minute until the last second of it has gone', () => {
    expect(minutesUntil('2026-10-15T08:51:00Z', '2026-10-15T08:06:00Z')).toBe(45)
    expect(minutesUntil('2026-10-15T08:51:00Z', '2026-10-15T08:50:59Z')).toBe(1)
    expect(minutesUntil('2026-10-15T08:51:00Z', '2026-10-15T08:51:30Z')).toBe(0)
    expect(minutesUntil('2026-10-15T08:51:00Z', '2026-10-15T09:03:00Z')).toBe(-12)
  })
})

describe('words and figures', () => {
  it('name a day of the pathway', () => {
    expect([formatDaysFromSurgery(8), formatDaysFromSurgery(0), formatDaysFromSurgery(-5), formatDaysFromSurgery(-1)])
      .toEqual(['day 8 after surgery', 'surgery today', '5 days before surgery', '1 day before surgery'])
  })

  it('give dioptres their sign and a true minus', () => {
    expect(formatDioptres(21, 1)).toBe('+21.0 D')
    expect(formatDioptres(-0.25)).toBe('−0.25 D')
    expect(formatDioptres(-0.001)).toBe('0.00 D')
  })

  it('group a telephone number as it is read out', () => {
    expect(formatTelephone('07700900386')).toBe('07700 900386')
    expect(formatTelephone('+447700900386')).toBe('07700 900386')
    expect(formatTelephone('extension 12')).toBe('extension 12')
  })

  it('count in words up to twelve', () => {
    expect([countWord(10), countWord(13), countOf(1, 'eye'), countOf(0, 'eye'), capitalise(countOf(2, 'eye'))]).toEqual(['ten', '13', 'one eye', 'no eyes', 'Two eyes'])
  })
})
