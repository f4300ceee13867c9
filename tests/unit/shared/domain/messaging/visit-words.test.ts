import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { visitWords } from '#shared/domain/messaging/visit-words'
import { languages } from '#shared/domain/messaging/vocabulary'

const at = new Date('2026-10-14T08:40:00Z')

describe('the date and time of a visit in words', () => {
  it('is written by the clock of the site', () => {
    expect(visitWords(at, 'Europe/London', 'en')).toEqual({ date: 'Wednesday 14 October', time: '09:40' })
    expect(visitWords(new Date('2026-10-25T23:30:00Z'), 'Europe/London', 'en')).toEqual({ date: 'Sunday 25 October', time: '23:30' })
    expect(visitWords(new Date('2026-03-29T23:30:00Z'), 'Europe/London', 'en')).toEqual({ date: 'Monday 30 March', time: '00:30' })
  })

  // Names of weekday and month: common dictionary words of each language.
  it.each([['cy', 'Dydd Mercher', 'Hydref'], ['pl', 'środa', 'października'], ['ar', 'الأربعاء', 'أكتوبر'], ['bn', 'বুধবার', 'অক্টোবর'], ['pa', 'ਬੁੱਧਵਾਰ', 'ਅਕਤੂਬਰ'], ['ur', 'بدھ', 'اکتوبر']] as const)('is written in %s', (language, weekday, month) => {
    const { date, time } = visitWords(at, 'Europe/London', language)
    expect(date).toContain(weekday)
    expect(date).toContain(month)
    expect(date).toContain('14')
    expect(time).toBe('09:40')
  })

  it('has Latin digits only, for any moment in any language', () => {
    fc.assert(fc.property(fc.date({ min: new Date('2000-01-01T00:00:00Z'), max: new Date('2099-12-31T00:00:00Z'), noInvalidDate: true }), fc.constantFrom(...languages), fc.constantFrom('Europe/London', 'Asia/Kolkata', 'Pacific/Apia'), (moment, language, zone) => {
      const { date, time } = visitWords(moment, zone, language)
      expect(date).toMatch(/\d/)
      expect(`${date}${time}`).not.toMatch(/(?![0-9])\p{Nd}/u)
      expect(time).toMatch(/^\d\d:\d\d$/)
    }))
  })
})
