import { expect, test } from 'vitest'
import { actRules, escalationRules, handRaisedReason, missingPatientReason } from '#shared/domain/escalation/rules'

test('a day-one patient who was not found is a matter of today', () => {
  expect(missingPatientReason('visit-1')).toEqual({ ruleId: 'visit.missing', ruleVersion: 1, urgency: 'today', sentence: 'Not found for the day-one check.', source: 'proposed', findings: { visitId: 'visit-1' } })
})

test('a clinician who asks chooses the urgency and the words', () => {
  expect(handRaisedReason('now', ' Please look at this lid ')).toEqual({ ruleId: 'hand.raised', ruleVersion: 1, urgency: 'now', sentence: 'Please look at this lid', source: 'A clinician asks', findings: {} })
})

test('no sheet fires a rule that an act fires', () => {
  for (const act of Object.values(actRules)) expect(escalationRules.map(rule => rule.id)).not.toContain(act.id)
})
