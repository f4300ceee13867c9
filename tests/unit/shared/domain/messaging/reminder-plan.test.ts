import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { dropDuplicates } from '#shared/domain/messaging/duplicates'
import { inZone, isQuiet, nextAllowed } from '#shared/domain/messaging/quiet-hours'
import { channelsFor, explainPlan, mayLeaveAt, planMessages } from '#shared/domain/messaging/reminder-plan'
import type { Occasion } from '#shared/domain/messaging/reminder-plan'
import { isWithdrawnBy, reminderRules } from '#shared/domain/messaging/reminder-rules'
import { answerKinds, messageKinds } from '#shared/domain/messaging/vocabulary'
import type { ContactPreferences } from '#shared/domain/messaging/vocabulary'
import { visitKinds } from '#shared/domain/review/vocabulary'

const siteZone = 'Europe/London'
const preferences: ContactPreferences = { preferred: 'text', hasMobile: true, hasEmail: true, textsStopped: false, wantsDropsReminders: true }
const at = (text: string) => new Date(text)
const channels = (occasion: Occasion, changed: Partial<ContactPreferences>) =>
  planMessages({ occasion, siteZone, preferences: { ...preferences, ...changed }, now: at('2026-01-05T12:00:00Z') }).map(message => message.channel)
const visit: Occasion = { kind: 'visit', visitKind: 'final', startsAt: at('2026-01-15T10:00:00Z') }

describe('channels', () => {
  it('follows the wish of the person and falls back to a call, never to silence', () => {
    expect(channels(visit, {})).toEqual(['text', 'text'])
    expect(channels(visit, { preferred: 'email' })).toEqual(['email', 'email'])
    expect(channels(visit, { preferred: 'email', hasEmail: false })).toEqual(['text', 'text'])
    expect(channels(visit, { textsStopped: true })).toEqual(['email', 'email'])
    expect(channels(visit, { textsStopped: true, hasEmail: false })).toEqual(['call', 'call'])
    expect(channels(visit, { preferred: 'call' })).toEqual(['call', 'call'])
    expect(channels({ kind: 'surgery-done', surgeryDate: '2026-01-10' }, { preferred: 'email' })).toEqual(['text', 'text'])
    expect(channels({ kind: 'letter', version: 1 }, {})).toEqual(['email'])
    expect(channels({ kind: 'letter', version: 1 }, { hasEmail: false })).toEqual(['call'])
  })

  it('announces a change by text and e-mail, and an alert whatever the preference', () => {
    const change: Occasion = { kind: 'visit-changed', startsAt: at('2026-02-01T10:00:00Z'), version: 3 }
    expect(channels(change, {})).toEqual(['text', 'email'])
    expect(channels(change, { hasEmail: false })).toEqual(['text'])
    expect(channels(change, { preferred: 'call' })).toEqual(['call'])
    expect(channels({ kind: 'alert', rung: 1, urgency: 'now' }, { preferred: 'call' })).toEqual(['text', 'email'])
  })

  it('sends drops reminders only to those who want them, and never rings for them', () => {
    const drops: Occasion = { kind: 'drops-change', dates: ['2026-01-20'] }
    expect(channels(drops, {})).toEqual(['text'])
    expect(channels(drops, { wantsDropsReminders: false })).toEqual([])
    expect(channels(drops, { hasMobile: false, hasEmail: false })).toEqual([])
  })

  it('answers a worried person and confirms STOP even after STOP', () => {
    const stopped = { ...preferences, textsStopped: true, hasEmail: false }
    for (const kind of answerKinds) expect(channelsFor(reminderRules[kind], stopped)).toEqual([reminderRules[kind].evenWhenStopped ? 'text' : 'call'])
    expect(answerKinds.filter(kind => reminderRules[kind].evenWhenStopped)).toEqual(['answer.worried', 'answer.stopped'])
  })
})

describe('what is planned, in full', () => {
  const now = at('2026-01-05T12:00:00Z')
  const full = (occasion: Occasion, when = now) => planMessages({ occasion, siteZone, preferences, now: when }).map(({ kind, occasion: name, topic, channel, dueAt, expiresAt }) => `${kind} | ${name} | ${topic} | ${channel} | ${dueAt.toISOString().slice(0, 16)} to ${expiresAt.toISOString().slice(0, 16)}`)

  it.each<[Occasion, string[]]>([
    [{ kind: 'surgery', startsAt: at('2026-01-15T09:00:00Z') }, ['surgery.reminder | 7 days before 2026-01-15T09:00 | surgery 2026-01-15T09:00 | text | 2026-01-08T10:00 to 2026-01-08T18:00', 'surgery.reminder | 1 day before 2026-01-15T09:00 | surgery 2026-01-15T09:00 | text | 2026-01-14T10:00 to 2026-01-14T18:00']],
    [visit, ['visit.reminder | 3 days before 2026-01-15T10:00 | visit 2026-01-15T10:00 | text | 2026-01-12T10:00 to 2026-01-12T18:00', 'visit.reminder | 1 day before 2026-01-15T10:00 | visit 2026-01-15T10:00 | text | 2026-01-14T10:00 to 2026-01-14T18:00']],
    [{ kind: 'visit', visitKind: 'day-one', startsAt: at('2026-01-15T08:00:00Z') }, ['dayone.morning | morning of 2026-01-15T08:00 | visit 2026-01-15T08:00 | text | 2026-01-15T07:00 to 2026-01-15T08:00']],
    [{ kind: 'note-signed', surgeryDate: '2026-01-14', signedAt: at('2026-01-14T11:00:00Z') }, ['dayone.evening | evening of 2026-01-14 | evening 2026-01-14 | text | 2026-01-14T13:00 to 2026-01-14T20:00']],
    [{ kind: 'surgery-done', surgeryDate: '2026-01-14' }, ['safety.day3 | after 2026-01-14 | symptom check 2026-01-17 | text | 2026-01-17T10:00 to 2026-01-17T20:00', 'safety.day7 | after 2026-01-14 | symptom check 2026-01-21 | text | 2026-01-21T10:00 to 2026-01-21T20:00']],
    [{ kind: 'visit-changed', startsAt: at('2026-01-16T10:00:00Z'), version: 4 }, ['text', 'email'].map(channel => `visit.changed | change 4 to 2026-01-16T10:00 by ${channel} | visit 2026-01-16T10:00 | ${channel} | 2026-01-05T12:00 to 2026-01-16T10:00`)],
    [{ kind: 'visit-cancelled', startsAt: at('2026-01-16T10:00:00Z'), version: 5 }, ['text', 'email'].map(channel => `visit.cancelled | change 5 by ${channel} | cancelled 2026-01-16T10:00 | ${channel} | 2026-01-05T12:00 to 2026-01-16T10:00`)],
    [{ kind: 'visit-missing', startsAt: at('2026-01-15T10:00:00Z') }, ['missing.patient | late for 2026-01-15T10:00 | late 2026-01-15T10:00 | text | 2026-01-15T10:20 to 2026-01-15T12:00']],
    [{ kind: 'drops-change', dates: ['2026-01-20'] }, ['drops.change | step 2026-01-20 | drops 2026-01-20 | text | 2026-01-20T09:00 to 2026-01-20T20:00']],
    [{ kind: 'alert', rung: 0, urgency: 'now' }, ['text', 'email'].map(channel => `alert.surgeon | rung 0 now by ${channel} | alert 0 now | ${channel} | 2026-01-05T12:00 to 2026-01-06T12:00`)],
    [{ kind: 'alert', rung: 2, urgency: 'today' }, ['text', 'email'].map(channel => `alert.rung | rung 2 today by ${channel} | alert 2 today | ${channel} | 2026-01-05T12:00 to 2026-01-06T12:00`)],
    [{ kind: 'letter', version: 2 }, ['letter.sent | version 2 | letter 2 | email | 2026-01-05T12:00 to 2026-01-12T12:00']],
    [{ kind: 'answer', answer: 'answer.worried', inboundId: 'i1' }, ['answer.worried | to i1 | answer.worried i1 | text | 2026-01-05T12:00 to 2026-01-05T13:00']],
  ])('%o', (occasion, expected) => {
    expect(full(occasion)).toEqual(expected)
  })

  it('answers a worried text in the night at once, and a plain one in the morning', () => {
    const night = at('2026-01-05T23:30:00Z')
    expect(full({ kind: 'answer', answer: 'answer.worried', inboundId: 'i1' }, night)).toEqual(['answer.worried | to i1 | answer.worried i1 | text | 2026-01-05T23:30 to 2026-01-06T00:30'])
    expect(full({ kind: 'answer', answer: 'answer.confirmed', inboundId: 'i1' }, night)).toEqual(['answer.confirmed | to i1 | answer.confirmed i1 | text | 2026-01-06T08:00 to 2026-01-06T11:30'])
  })

  it('ends the last reminder of an early visit at its start', () => {
    expect(full({ kind: 'surgery', startsAt: at('2026-01-15T00:30:00Z') }).at(-1)).toContain('to 2026-01-14T18:00')
    expect(explainPlan({ occasion: { kind: 'visit-cancelled', startsAt: at('2026-01-06T07:45:00Z'), version: 1 }, siteZone, preferences, now: at('2026-01-05T21:00:00Z') }).planned).toMatchObject([{ occasion: 'change 1 by call', channel: 'call', dueAt: at('2026-01-05T21:00:00Z') }])
    expect(explainPlan({ occasion: { kind: 'visit-cancelled', startsAt: at('2026-01-06T08:00:00Z'), version: 1 }, siteZone, preferences, now: at('2026-01-05T21:00:00Z') }).planned).toMatchObject([{ channel: 'call' }])
  })

  it('says why drops reminders are not planned', () => {
    const drops = (changed: Partial<ContactPreferences>) => explainPlan({ occasion: { kind: 'drops-change', dates: ['2026-01-20'] }, siteZone, preferences: { ...preferences, ...changed }, now })
    expect(drops({ wantsDropsReminders: false })).toEqual({ planned: [], skipped: [{ kind: 'drops.change', occasion: 'step 2026-01-20', why: 'not-wanted' }] })
    expect(drops({ hasMobile: false, hasEmail: false }).skipped).toEqual([{ kind: 'drops.change', occasion: 'step 2026-01-20', why: 'not-wanted' }])
  })

  it('asks again at the moment of leaving', () => {
    expect(mayLeaveAt('visit.reminder', at('2026-07-01T06:59:00Z'), siteZone)).toBe(false)
    expect(mayLeaveAt('visit.reminder', at('2026-07-01T07:00:00Z'), siteZone)).toBe(true)
    expect(mayLeaveAt('visit.reminder', at('2026-07-01T19:00:00Z'), siteZone)).toBe(false)
    expect(mayLeaveAt('dayone.morning', at('2026-07-01T06:00:00Z'), siteZone)).toBe(true)
    expect(mayLeaveAt('alert.surgeon', at('2026-07-01T02:00:00Z'), siteZone)).toBe(true)
    expect(mayLeaveAt('answer.worried', at('2026-07-01T02:00:00Z'), siteZone)).toBe(true)
  })
})

describe('purpose and expiry', () => {
  it('plans nothing that has passed its purpose and says so', () => {
    const now = at('2026-01-14T18:00:00Z')
    expect(explainPlan({ occasion: visit, siteZone, preferences, now })).toEqual({ planned: [], skipped: [
      { kind: 'visit.reminder', occasion: '3 days before 2026-01-15T10:00', why: 'past' }, { kind: 'visit.reminder', occasion: '1 day before 2026-01-15T10:00', why: 'past' },
    ] })
    expect(planMessages({ occasion: visit, siteZone, preferences, now: at('2026-01-14T17:59:00Z') })).toMatchObject([{ dueAt: at('2026-01-14T17:59:00Z'), expiresAt: now }])
  })

  it('names the same message the same way each time, and a moved visit in a new way', () => {
    const again = (occasion: Occasion) => planMessages({ occasion, siteZone, preferences, now: at('2026-01-05T12:00:00Z') }).map(message => message.occasion)
    expect(again(visit)).toEqual(again(visit))
    expect(again(visit)).not.toEqual(again({ ...visit, startsAt: at('2026-01-16T10:00:00Z') } as Occasion))
    expect(again({ kind: 'alert', rung: 0, urgency: 'today' })).not.toEqual(again({ kind: 'alert', rung: 0, urgency: 'now' }))
    const there: Occasion = { kind: 'visit-changed', startsAt: at('2026-01-20T10:00:00Z'), version: 1 }
    expect(again(there)).not.toEqual(again({ ...there, version: 3 }))
  })

  it('knows what withdraws a queued message', () => {
    expect(isWithdrawnBy('visit.reminder', 'arrived')).toBe(true)
    expect(isWithdrawnBy('safety.day3', 'escalated')).toBe(true)
    expect(isWithdrawnBy('surgery.reminder', 'arrived')).toBe(false)
    expect(isWithdrawnBy('alert.rung', 'acknowledged')).toBe(true)
    expect(Object.keys(reminderRules).sort()).toEqual([...messageKinds].sort())
  })

  it('lets a text for a missing patient go only while it helps', () => {
    const late = (now: string) => explainPlan({ occasion: { kind: 'visit-missing', startsAt: at('2026-01-15T10:00:00Z') }, siteZone, preferences, now: at(now) })
    expect(late('2026-01-15T10:05:00Z').planned[0]?.dueAt).toEqual(at('2026-01-15T10:20:00Z'))
    expect(late('2026-01-15T12:00:00Z').skipped[0]?.why).toBe('past')
    expect(explainPlan({ occasion: { kind: 'visit-missing', startsAt: at('2026-01-15T19:50:00Z') }, siteZone, preferences, now: at('2026-01-15T19:50:00Z') }).skipped[0]?.why).toBe('quiet-until-past')
  })
})

const zones = Intl.supportedValuesOf('timeZone')
const zone = fc.oneof(fc.constant('Europe/London'), fc.constantFrom(...zones))
const aroundChanges = fc.constantFrom('2026-03-28T12:00:00Z', '2026-03-29T00:00:00Z', '2026-03-29T02:00:00Z', '2026-10-24T12:00:00Z', '2026-10-25T00:00:00Z', '2026-10-25T02:00:00Z')
const instant = fc.oneof(
  fc.date({ min: at('1990-01-01T00:00:00Z'), max: at('2049-12-31T00:00:00Z'), noInvalidDate: true }),
  fc.tuple(aroundChanges, fc.integer({ min: -5 * 1440, max: 5 * 1440 })).map(([base, minutes]) => new Date(at(base).getTime() + minutes * 60_000)),
)
const day = instant.map(date => date.toISOString().slice(0, 10))
const anyOccasion: fc.Arbitrary<Occasion> = fc.oneof(
  fc.record({ kind: fc.constant('surgery' as const), startsAt: instant }),
  fc.record({ kind: fc.constant('visit' as const), visitKind: fc.constantFrom(...visitKinds), startsAt: instant }),
  fc.record({ kind: fc.constant('note-signed' as const), surgeryDate: day, signedAt: instant }),
  fc.record({ kind: fc.constant('surgery-done' as const), surgeryDate: day }),
  fc.record({ kind: fc.constantFrom('visit-changed' as const, 'visit-cancelled' as const), startsAt: instant, version: fc.nat() }),
  fc.record({ kind: fc.constant('visit-missing' as const), startsAt: instant }),
  fc.record({ kind: fc.constant('drops-change' as const), dates: fc.array(day, { maxLength: 4 }) }),
  fc.record({ kind: fc.constant('answer' as const), answer: fc.constantFrom(...answerKinds), inboundId: fc.uuid() }),
)
const anyPreferences = fc.record({ preferred: fc.constantFrom('text' as const, 'email' as const, 'call' as const), hasMobile: fc.boolean(), hasEmail: fc.boolean(), textsStopped: fc.boolean(), wantsDropsReminders: fc.boolean() })

describe('any date in any zone', () => {
  it('never plans a patient message in quiet hours, before now, or at or after its expiry', () => {
    fc.assert(fc.property(anyOccasion, zone, instant, fc.integer({ min: -20_000, max: 20_000 }), anyPreferences, (occasion, site, far, minutes, wishes) => {
      const anchor = 'startsAt' in occasion ? occasion.startsAt : 'signedAt' in occasion ? occasion.signedAt : far
      const now = new Date(anchor.getTime() + minutes * 60_000)
      for (const message of planMessages({ occasion, siteZone: site, preferences: wishes, now })) {
        expect(Number.isNaN(message.dueAt.getTime())).toBe(false)
        expect(message.dueAt.getTime()).toBeGreaterThanOrEqual(now.getTime())
        expect(message.dueAt.getTime()).toBeLessThan(message.expiresAt.getTime())
        if (message.channel === 'call' || message.kind === 'answer.worried') continue
        expect(mayLeaveAt(message.kind, message.dueAt, site)).toBe(true)
        const { hour } = inZone(message.dueAt, site)
        expect(hour).toBeLessThan(20)
        expect(hour).toBeGreaterThanOrEqual(message.kind === 'dayone.morning' ? 7 : 8)
      }
    }), { numRuns: 3000 })
  }, 60_000)

  it('waits at most until the next morning, and only inside quiet hours', () => {
    fc.assert(fc.property(instant, zone, (now, site) => {
      const next = nextAllowed(now, site)
      expect(isQuiet(next, site)).toBe(false)
      expect(next.getTime()).toBeGreaterThanOrEqual(now.getTime())
      if (!isQuiet(now, site)) expect(next).toEqual(now)
      // Twelve hours of quiet; clock changes of some zones and years move more than one.
      expect(next.getTime() - now.getTime()).toBeLessThanOrEqual(18 * 3_600_000)
    }), { numRuns: 2000 })
  }, 60_000)
})

describe('two that say the same', () => {
  const message = (changed: object) => ({ personId: 'p1', kind: 'visit.reminder' as const, topic: 'visit 2026-01-15T10:00', channel: 'text' as const, dueAt: at('2026-01-14T10:00:00Z'), ...changed })

  it('drops the later within 30 minutes, to the same person', () => {
    const first = message({})
    const second = message({ kind: 'visit.changed', dueAt: at('2026-01-14T10:30:00Z') })
    expect(dropDuplicates([second, first])).toEqual({ kept: [first], dropped: [{ message: second, sameAs: first }] })
    expect(dropDuplicates([first, message({ dueAt: at('2026-01-14T10:31:00Z') })]).dropped).toEqual([])
    expect(dropDuplicates([first, message({ personId: 'p2' })]).dropped).toEqual([])
    expect(dropDuplicates([first, message({ topic: 'visit 2026-01-15T10:30' })]).dropped).toEqual([])
  })

  it('keeps the text and the e-mail of one announcement, and every call', () => {
    expect(dropDuplicates([message({ kind: 'visit.changed' }), message({ kind: 'visit.changed', channel: 'email' }), message({ channel: 'call' })]).dropped).toEqual([])
    expect(dropDuplicates([message({ channel: 'call' }), message({})]).dropped).toEqual([])
  })

  it('drops a reminder by e-mail that a change by text has just said, and of two at once the first given', () => {
    const change = message({ kind: 'visit.changed' })
    const reminder = message({ channel: 'email' })
    expect(dropDuplicates([change, reminder])).toEqual({ kept: [change], dropped: [{ message: reminder, sameAs: change }] })
    expect(dropDuplicates([reminder, change]).kept).toEqual([reminder])
  })

  it('asks the symptoms of two eyes once', () => {
    const both = [0, 1].flatMap(() => planMessages({ occasion: { kind: 'surgery-done', surgeryDate: '2026-01-10' }, siteZone, preferences, now: at('2026-01-11T12:00:00Z') })).map(planned => ({ ...planned, personId: 'p1' }))
    expect(dropDuplicates(both).kept.map(kept => kept.kind)).toEqual(['safety.day3', 'safety.day7'])
  })

  it('loses nothing and leaves no pair behind', () => {
    const any = fc.record({ personId: fc.constantFrom('a', 'b'), kind: fc.constantFrom('visit.reminder' as const, 'visit.changed' as const), topic: fc.constantFrom('x', 'y'), channel: fc.constantFrom('text' as const, 'email' as const, 'call' as const), dueAt: fc.integer({ min: 0, max: 120 }).map(minutes => new Date(minutes * 60_000)) })
    fc.assert(fc.property(fc.array(any, { maxLength: 12 }), (messages) => {
      const { kept, dropped } = dropDuplicates(messages)
      expect(kept.length + dropped.length).toBe(messages.length)
      expect(dropDuplicates(kept).dropped).toEqual([])
    }))
  })
})
