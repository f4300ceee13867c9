import { describe, expect, test } from 'vitest'
import { missingPatientSteps, missingStepPlan } from '#shared/domain/visit/missing-steps'
import type { MissingStepName } from '#shared/domain/visit/missing-steps'
import { visitStates } from '#shared/domain/visit/vocabulary'

const visit = { id: 'visit-1', kind: 'day-one', state: 'booked', startsAt: new Date('2026-03-28T09:00:00Z') } as const
const at = (minutes: number) => new Date(visit.startsAt.getTime() + minutes * 60_000)
const did = (...steps: [MissingStepName, number][]) => steps.map(([step, minutes]) => ({ step, at: at(minutes) }))

describe('a patient who has not come', () => {
  test.each([[-30, 0, false, false], [0, 0, false, false], [19, 19, false, false], [20, 20, true, true], [21, 21, true, true]])('%d minutes after the time is %d late: missing %s, call due %s', (minutes, late, isMissing, isDue) => {
    expect(missingPatientSteps(visit, [], at(minutes))).toMatchObject({ minutesLate: late, isMissing, next: { step: 'call', dueAt: at(20), isDue } })
  })

  test('is called, texted, called again and then not found, each when its time has come', () => {
    const done: [MissingStepName, number][] = []
    for (const { step, minutesLate } of missingStepPlan) {
      expect(missingPatientSteps(visit, did(...done), at(minutesLate - 1)).next).toMatchObject({ step, isDue: false })
      expect(missingPatientSteps(visit, did(...done), at(minutesLate)).next).toMatchObject({ step, dueAt: at(minutesLate), isDue: true })
      done.push([step, minutesLate])
    }
    expect(missingPatientSteps(visit, did(...done), at(60))).toMatchObject({ isMissing: true, next: null, end: 'not-found', done: ['call', 'text', 'second-call', 'not-found'], raises: { ruleId: 'visit.missing', urgency: 'today', findings: { visitId: 'visit-1' } } })
  })

  test('raises nothing while the steps go on, or when it was no day-one check', () => {
    expect(missingPatientSteps(visit, did(['call', 20], ['text', 25], ['second-call', 35]), at(120)).raises).toBeNull()
    expect(missingPatientSteps({ ...visit, kind: 'final' }, did(['not-found', 45]), at(60))).toMatchObject({ end: 'not-found', raises: null })
  })

  test('is found: the steps end and nothing is raised', () => {
    expect(missingPatientSteps(visit, did(['call', 20], ['found', 22]), at(30))).toMatchObject({ isMissing: false, next: null, end: 'found', raises: null })
  })

  test('is not asked for a step before one that was taken', () => {
    expect(missingPatientSteps(visit, did(['second-call', 30]), at(46)).next).toMatchObject({ step: 'not-found', isDue: true })
  })

  test('steps recorded out of order are read in order, and none from later than now', () => {
    expect(missingPatientSteps(visit, did(['text', 26], ['call', 21]), at(30)).done).toEqual(['call', 'text'])
    expect(missingPatientSteps(visit, did(['call', 40]), at(30))).toMatchObject({ done: [], next: { step: 'call' } })
  })

  test.each(visitStates.filter(state => state !== 'booked' && state !== 'missing'))('a visit that is %s starts no steps', (state) => {
    expect(missingPatientSteps({ ...visit, state }, [], at(60))).toMatchObject({ isMissing: false, next: null })
  })
})
