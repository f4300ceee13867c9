import dayjs from 'dayjs'
import timezone from 'dayjs/plugin/timezone.js'
import utc from 'dayjs/plugin/utc.js'
import { describe, expect, it } from 'vitest'
import { explainPlan, planMessages } from '#shared/domain/messaging/reminder-plan'
import type { Occasion } from '#shared/domain/messaging/reminder-plan'
import { atWallTime, inZone, isQuiet, nextAllowed } from '#shared/domain/messaging/quiet-hours'
import type { WallTime } from '#shared/domain/messaging/quiet-hours'
import type { ContactPreferences } from '#shared/domain/messaging/vocabulary'
import { Temporal } from 'temporal-polyfill'

dayjs.extend(utc)
dayjs.extend(timezone)

const london = 'Europe/London'
const preferences: ContactPreferences = { preferred: 'text', hasMobile: true, hasEmail: true, textsStopped: false, wantsDropsReminders: true }
const plan = (occasion: Occasion, now = '2026-01-01T00:00:00Z', siteZone = london) => planMessages({ occasion, siteZone, preferences, now: new Date(now) })
const dues = (occasion: Occasion, now?: string) => plan(occasion, now).map(message => message.dueAt.toISOString().slice(0, 16))

/**
 * Clock changes of Europe/London, from the IANA time zone database as Node carries it: forward 01:00 to 02:00 on
 * 29 March 2026, back 02:00 to 01:00 on 25 October 2026. The instants were worked out by hand from UTC offsets.
 */
describe('reminders by the wall clock of the site', () => {
  // Each row: visit in UTC; its reminders 3 days and 1 day before at 10:00 local, in UTC. Common practice.
  it.each([
    ['2026-02-10T09:40:00Z', ['2026-02-07T10:00', '2026-02-09T10:00']], // winter
    ['2026-07-10T08:40:00Z', ['2026-07-07T09:00', '2026-07-09T09:00']], // summer: 10:00 is 09:00Z
    ['2026-03-30T08:40:00Z', ['2026-03-27T10:00', '2026-03-29T09:00']], // first is before, second after the change
    ['2026-03-29T08:40:00Z', ['2026-03-26T10:00', '2026-03-28T10:00']], // visit on the day of the change
    ['2026-10-26T09:40:00Z', ['2026-10-23T09:00', '2026-10-25T10:00']], // back: second is already winter
    ['2026-10-25T09:40:00Z', ['2026-10-22T09:00', '2026-10-24T09:00']],
  ])('a visit at %s is announced at %j', (startsAt, expected) => {
    expect(dues({ kind: 'visit', visitKind: 'final', startsAt: new Date(startsAt) })).toEqual(expected)
  })

  it.each([
    ['2026-04-02T07:30:00Z', ['2026-03-26T10:00', '2026-04-01T09:00']],
    ['2026-10-28T08:30:00Z', ['2026-10-21T09:00', '2026-10-27T10:00']],
  ])('an operation at %s is announced 7 days and 1 day before: %j', (startsAt, expected) => {
    expect(dues({ kind: 'surgery', startsAt: new Date(startsAt) })).toEqual(expected)
  })

  // 2 h after the note, elapsed; the last moment is 19:55 local. Common practice.
  it.each([
    ['2026-01-14', '2026-01-14T11:00:00Z', ['2026-01-14T13:00']],
    ['2026-07-14', '2026-07-14T16:30:00Z', ['2026-07-14T18:30']], // 19:30 BST
    ['2026-07-14', '2026-07-14T17:10:00Z', ['2026-07-14T18:55']], // would be 20:10 BST
    ['2026-07-14', '2026-07-14T18:57:00Z', ['2026-07-14T18:57']], // signed 19:57 BST: at once
    ['2026-07-14', '2026-07-14T19:00:00Z', []], // signed 20:00 BST: too late
    ['2026-07-14', '2026-07-15T09:00:00Z', []], // signed the next day
  ])('surgery on %s with the note signed at %s gives the evening text at %j', (surgeryDate, signedAt, expected) => {
    expect(dues({ kind: 'note-signed', surgeryDate, signedAt: new Date(signedAt) }, signedAt)).toEqual(expected)
  })

  // 90 min before, not before 07:00 local.
  it.each([
    ['2026-01-15T09:20:00Z', ['2026-01-15T07:50']],
    ['2026-01-15T08:00:00Z', ['2026-01-15T07:00']],
    ['2026-03-29T08:20:00Z', ['2026-03-29T06:50']], // 09:20 BST on the morning of the change
    ['2026-03-29T07:00:00Z', ['2026-03-29T06:00']], // 08:00 BST: 07:00 BST
    ['2026-10-25T08:00:00Z', ['2026-10-25T07:00']],
  ])('a day-one visit at %s gives the morning text at %j', (startsAt, expected) => {
    expect(dues({ kind: 'visit', visitKind: 'day-one', startsAt: new Date(startsAt) })).toEqual(expected)
  })

  it.each([
    ['2026-03-26', ['2026-03-29T09:00', '2026-04-02T09:00']], // day 3 is the day of the change
    ['2026-03-27', ['2026-03-30T09:00', '2026-04-03T09:00']],
    ['2026-10-22', ['2026-10-25T10:00', '2026-10-29T10:00']],
    ['2026-12-29', ['2027-01-01T10:00', '2027-01-05T10:00']],
    ['2028-02-26', ['2028-02-29T10:00', '2028-03-04T10:00']], // leap day
  ])('surgery on %s gives the checks of day 3 and day 7 at %j', (surgeryDate, expected) => {
    expect(dues({ kind: 'surgery-done', surgeryDate })).toEqual(expected)
  })

  it('reminds of a step down at 09:00 on each day', () => {
    expect(dues({ kind: 'drops-change', dates: ['2026-03-22', '2026-03-29', '2026-10-25'] })).toEqual(['2026-03-22T09:00', '2026-03-29T08:00', '2026-10-25T09:00'])
  })

  // Quiet hours 20:00-08:00 site's time (common practice): at once means the next allowed minute.
  it.each([
    ['2026-07-14T10:00:00Z', '2026-07-14T10:00'], ['2026-07-14T19:00:00Z', '2026-07-15T07:00'], ['2026-07-14T18:59:00Z', '2026-07-14T18:59'],
    ['2026-03-28T21:00:00Z', '2026-03-29T07:00'], ['2026-03-29T00:30:00Z', '2026-03-29T07:00'], ['2026-10-24T19:30:00Z', '2026-10-25T08:00'], ['2026-10-25T00:30:00Z', '2026-10-25T08:00'],
  ])('a visit moved at %s is told from %s', (now, expected) => {
    const told = plan({ kind: 'visit-changed', startsAt: new Date('2027-01-05T10:00:00Z'), version: 1 }, now)
    expect(told.map(message => [message.channel, message.dueAt.toISOString().slice(0, 16)])).toEqual([['text', expected], ['email', expected]])
  })

  it('alerts a surgeon in the night of both clock changes at once', () => {
    for (const now of ['2026-03-29T01:00:00Z', '2026-10-25T00:30:00Z', '2026-10-25T01:30:00Z']) {
      expect(plan({ kind: 'alert', rung: 0, urgency: 'now' }, now).map(message => message.dueAt.toISOString())).toEqual([new Date(now).toISOString(), new Date(now).toISOString()])
    }
  })

  it('rings when a morning visit is cancelled in the night, because no text may leave in time', () => {
    expect(explainPlan({ occasion: { kind: 'visit-cancelled', startsAt: new Date('2026-07-15T06:45:00Z'), version: 2 }, siteZone: london, preferences, now: new Date('2026-07-14T20:30:00Z') })).toMatchObject({ planned: [{ channel: 'call' }], skipped: [] })
  })
})

describe('wall-clock time in a gap and in an overlap', () => {
  // RFC 5545 3.3.5 reads a time in a gap with the offset before it, and a time that exists twice as the first.
  it.each([['2026-03-29', '01:30', '2026-03-29T01:30:00Z'], ['2026-10-25', '01:30', '2026-10-25T00:30:00Z'], ['2026-03-29', '00:59', '2026-03-29T00:59:00Z'], ['2026-03-29', '02:00', '2026-03-29T01:00:00Z']] as const)('%s %s in London is %s', (date, time, expected) => {
    expect(atWallTime(Temporal.PlainDate.from(date), time as WallTime, london).toInstant().toString()).toBe(expected)
  })

  it('takes the time still to come when clocks go back over the end of quiet hours', () => {
    // In London 01:30 happens at 00:30Z and again at 01:30Z on 25 October 2026.
    expect(nextAllowed(new Date('2026-10-25T00:10:00Z'), london, '01:30').toISOString()).toBe('2026-10-25T00:30:00.000Z')
    expect(nextAllowed(new Date('2026-10-25T01:10:00Z'), london, '01:30').toISOString()).toBe('2026-10-25T01:30:00.000Z')
    expect(nextAllowed(new Date('2026-10-25T01:30:00Z'), london, '01:30').toISOString()).toBe('2026-10-25T01:30:00.000Z')
  })

  it('waits over the day that Samoa skipped, 30 December 2011', () => {
    // Clocks went from the end of 29 December (UTC-10) to 31 December (UTC+14): 21:00 on the 29th is 07:00Z, 08:00 on the 31st is 18:00Z.
    expect(nextAllowed(new Date('2011-12-30T07:00:00Z'), 'Pacific/Apia').toISOString()).toBe('2011-12-30T18:00:00.000Z')
  })

  it('agrees with dayjs for mornings and evenings of every week of a year', () => {
    for (const siteZone of [london, 'America/New_York', 'Asia/Kolkata', 'Australia/Lord_Howe']) {
      for (let day = 0; day < 365; day += 7) {
        const date = Temporal.PlainDate.from('2026-01-01').add({ days: day })
        for (const time of ['07:00', '08:00', '10:00', '19:45'] as const) {
          expect(atWallTime(date, time, siteZone).epochMilliseconds).toBe(dayjs.tz(`${date.toString()} ${time}`, siteZone).valueOf())
        }
      }
    }
  })

  it('finds the morning after by a second computation that walks minute by minute', () => {
    for (const start of ['2026-03-28T19:59:00Z', '2026-03-28T20:00:00Z', '2026-10-24T19:00:00Z', '2026-10-25T01:10:00Z', '2026-06-01T07:00:00Z', '2026-06-01T06:59:00Z']) {
      let walking = new Date(start)
      while (isQuiet(walking, london)) walking = new Date(walking.getTime() + 60_000)
      expect(nextAllowed(new Date(start), london)).toEqual(walking)
      expect(inZone(walking, london).hour).toBeGreaterThanOrEqual(8)
    }
  })
})
