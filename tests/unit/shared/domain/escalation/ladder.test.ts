import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { answerBy, lastRung, nextRungAfter, rungSchedule } from '#shared/domain/escalation/ladder'
import type { Shift } from '#shared/domain/escalation/ladder'
import { mergeReasons } from '#shared/domain/escalation/merge'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'

const london = 'Europe/London'
const from = (iso: string) => new Date(iso)

describe('when an answer is due', () => {
  // The hours and days of each urgency: the product's own words (now within the hour, today the same day, this week 5 working days).
  test.each([
    ['now', '2026-03-27T08:40:00Z', '2026-03-27T09:40:00Z'],
    ['now', '2026-03-29T00:30:00Z', '2026-03-29T01:30:00Z'],
    ['today', '2026-03-27T08:40:00Z', '2026-03-27T17:00:00Z'],
    ['today', '2026-03-27T15:00:00Z', '2026-03-27T17:00:00Z'],
    ['today', '2026-03-27T15:01:00Z', '2026-03-27T17:01:00Z'],
    ['today', '2026-03-30T08:40:00Z', '2026-03-30T16:00:00Z'],
    ['this-week', '2026-03-23T08:40:00Z', '2026-03-30T16:00:00Z'],
    ['this-week', '2026-03-27T20:00:00Z', '2026-04-03T16:00:00Z'],
    ['this-week', '2026-03-28T09:00:00Z', '2026-04-03T16:00:00Z'],
  ] as const)('%s raised at %s is due at %s', (urgency, raisedAt, due) => {
    expect(answerBy(urgency, from(raisedAt), london)).toEqual(from(due))
  })
})

describe('the next rung', () => {
  test.each([
    ['now', '2026-03-27T23:58:00Z', '2026-03-28T00:03:00Z'],
    ['now', '2026-10-25T00:58:00Z', '2026-10-25T01:03:00Z'],
    ['today', '2026-03-29T00:30:00Z', '2026-03-29T01:30:00Z'],
    ['this-week', '2026-03-24T10:00:00Z', '2026-03-25T10:00:00Z'],
    ['this-week', '2026-03-27T10:00:00Z', '2026-03-30T09:00:00Z'],
    ['this-week', '2026-03-28T12:00:00Z', '2026-03-31T07:00:00Z'],
    ['this-week', '2026-03-24T06:00:00Z', '2026-03-25T08:00:00Z'],
    ['this-week', '2026-03-24T18:00:00Z', '2026-03-26T08:00:00Z'],
  ] as const)('%s waiting from %s is told at %s', (urgency, since, due) => {
    expect(nextRungAfter(urgency, from(since), london)).toEqual(from(due))
  })

  test('comes later than the one before, whatever the hour', () => {
    fc.assert(fc.property(fc.constantFrom(...urgencies), fc.date({ min: from('2026-01-01T00:00:00Z'), max: from('2027-01-01T00:00:00Z'), noInvalidDate: true }), (urgency, at) => {
      expect(nextRungAfter(urgency, at, london) > at).toBe(true)
      expect(answerBy(urgency, at, london) > at).toBe(true)
    }))
  })
})

describe('the ladder of an escalation that nobody answers', () => {
  const shifts: Shift[] = [
    { rung: 1, personId: 'first', startsAt: from('2026-03-27T08:00:00Z'), endsAt: from('2026-03-27T18:00:00Z') },
    { rung: 2, personId: 'second, day', startsAt: from('2026-03-27T08:00:00Z'), endsAt: from('2026-03-27T09:05:00Z') },
    { rung: 2, personId: 'second, late', startsAt: from('2026-03-27T09:05:00Z'), endsAt: from('2026-03-27T18:00:00Z') },
  ]

  test('tells the first rung at once and each next one after its wait, by who is on then', () => {
    expect(rungSchedule('now', from('2026-03-27T09:00:00Z'), london, shifts)).toEqual([
      { rung: 1, at: from('2026-03-27T09:00:00Z'), personId: 'first' },
      { rung: 2, at: from('2026-03-27T09:05:00Z'), personId: 'second, late' },
      { rung: 3, at: from('2026-03-27T09:10:00Z'), personId: null },
    ])
  })

  test('names nobody where the rota has a gap, and still tells every rung', () => {
    expect(rungSchedule('today', from('2026-03-27T17:30:00Z'), london, shifts).map(step => step.personId)).toEqual(['first', null, null])
    expect(rungSchedule('this-week', from('2026-03-27T09:00:00Z'), london, [])).toHaveLength(lastRung)
  })
})

describe('joining reasons', () => {
  const reason = (ruleId: string, urgency: EscalationReason['urgency'], sentence = ruleId): EscalationReason => ({ ruleId, ruleVersion: 1, urgency, sentence, source: 'proposed', findings: { sentence } })

  test('a worse firing of the same rule replaces the milder one; a milder one takes nothing back', () => {
    const total = reason('chamber.hyphaema', 'now', 'Hyphaema, total.')
    const layer = reason('chamber.hyphaema', 'today', 'Hyphaema, grade I.')
    expect(mergeReasons([layer], [total])).toEqual({ reasons: [total], urgency: 'now' })
    expect(mergeReasons([total], [layer])).toEqual({ reasons: [total], urgency: 'now' })
  })

  test('an equal firing brings the newer findings', () => {
    const older = reason('pain.moderate', 'today', 'Pain 4 of 10.')
    const newer = reason('pain.moderate', 'today', 'Pain 5 of 10.')
    expect(mergeReasons([older], [newer]).reasons).toEqual([newer])
  })

  test('the urgency only rises, no rule is lost, and joining the same again changes nothing', () => {
    const some = fc.array(fc.tuple(fc.constantFrom('a.a', 'b.b', 'c.c', 'd.d'), fc.constantFrom(...urgencies)).map(([id, urgency]) => reason(id, urgency)), { minLength: 1, maxLength: 6 })
    fc.assert(fc.property(some, some, (existing, added) => {
      const before = mergeReasons([], existing)
      const after = mergeReasons(before.reasons, added)
      expect(urgencies.indexOf(after.urgency)).toBeLessThanOrEqual(Math.min(...[...existing, ...added].map(each => urgencies.indexOf(each.urgency))))
      expect(new Set(after.reasons.map(each => each.ruleId))).toEqual(new Set([...existing, ...added].map(each => each.ruleId)))
      expect(mergeReasons(after.reasons, after.reasons)).toEqual(after)
    }))
  })
})
