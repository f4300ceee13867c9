import { describe, expect, it } from 'vitest'
import { dateFromParts, parseNumber } from '../../../../app/utils/number'

describe('a typed number', () => {
  it('is read with either minus, a comma or a point', () => {
    expect(['17', ' +20.5 ', '-0.25', '−0,25', '.5'].map(parseNumber)).toEqual([17, 20.5, -0.25, -0.25, 0.5])
  })

  it('is never 0 when it is blank or unreadable', () => {
    expect(['', '  ', 'abc', '1.2.3', '6/9', '1e3', '--2'].map(parseNumber)).toEqual([null, null, null, null, null, null, null])
  })
})

describe('a date in three boxes', () => {
  it('is a day on the calendar', () => {
    expect(dateFromParts('3', '2', '1955')).toBe('1955-02-03')
    expect(dateFromParts('29', '2', '2024')).toBe('2024-02-29')
  })

  it('is nothing while it is no such day', () => {
    expect([dateFromParts('29', '2', '2023'), dateFromParts('31', '4', '2026'), dateFromParts('3', '13', '1955'), dateFromParts('3', '2', '55'), dateFromParts('', '', '')]).toEqual([null, null, null, null, null])
  })
})
