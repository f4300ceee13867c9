import { describe, expect, it } from 'vitest'
import { readSymptoms, symptomIds } from '#shared/domain/messaging/symptoms'

describe('the patient\'s symptom check', () => {
  // Proposed routes; which signs are red: AAO Cataract in the Adult Eye summary, as named beside the table.
  it.each([
    ['sight-worse', 'now'], ['curtain', 'now'], ['pain-growing', 'now'], ['pain-vomiting', 'now'], ['redness-growing', 'now'], ['lids-swollen', 'now'], ['discharge', 'now'], ['injury', 'now'],
    ['flashes-floaters', 'today'], ['something-on-eye', 'today'], ['double', 'today'], ['drops', 'nurse'], ['question', 'nurse'],
  ] as const)('%s leads to %s', (id, route) => {
    expect(readSymptoms([id]).route).toBe(route)
  })

  it('takes the most urgent of several and keeps every reason', () => {
    const reading = readSymptoms(['drops', 'double', 'injury'])
    expect(reading.urgency).toBe('now')
    expect(reading.reasons.map(reason => reason.ruleId).sort()).toEqual(['patient.double', 'patient.injury'])
    expect(reading.nurseWords).toContain('drops')
  })

  it('raises nothing when nothing is chosen', () => {
    expect(readSymptoms([])).toEqual({ urgency: null, reasons: [], nurseWords: null, route: 'none' })
  })

  it('names each symptom once', () => {
    expect(new Set(symptomIds).size).toBe(symptomIds.length)
  })
})
