import { describe, expect, test } from 'vitest'
import { evaluateReview } from '#shared/domain/escalation/evaluate'
import { escalationRules } from '#shared/domain/escalation/rules'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { dayOneContext, quietFindings, sees } from '#tests/factories/escalation'

const urgencyOf = (findings: Partial<ReviewFindings>, context: Partial<ReviewContext> = {}) => evaluateReview({ ...quietFindings, ...findings }, { ...dayOneContext, ...context }).urgency
const fired = (findings: Partial<ReviewFindings>, context: Partial<ReviewContext> = {}) => evaluateReview({ ...quietFindings, ...findings }, { ...dayOneContext, ...context }).reasons.map(reason => reason.ruleId)
const limitOf = (ruleId: string, name: string) => escalationRules.find(rule => rule.id === ruleId)?.thresholds[name]?.value

describe('suspected infection', () => {
  // EVS Group 1995, Arch Ophthalmol 113:1479-1496, features at presentation as quoted by a textbook chapter: pain 74 %, hypopyon 85 %.
  // ESCRS study: pain 79 %, hypopyon 72 %. So about 1 in 4 has no pain and 15 to 28 % no hypopyon.
  test('needs neither pain nor hypopyon', () => {
    expect(urgencyOf({ ...sees(0.9), lidSwelling: true, painScore: 0, hypopyonMm: 0 }, { daysAfterSurgery: 5 })).toBe('now')
    expect(urgencyOf({ cells: '3+', vitreousCells: true, painScore: 0, hypopyonMm: 0 }, { daysAfterSurgery: 6 })).toBe('now')
  })

  // College of Optometrists, clinical management guideline: emergency referral the same day, category A1; RVEEH guideline: presentation to
  // treatment within 60 minutes. Hence `now`, which is a surgeon within the hour, and never `today`.
  test('is always a matter of the hour', () => {
    for (const signs of [{ painScore: 5, hypopyonMm: 1 }, { fibrin: true, redReflex: 'absent' }, { painGrowing: true, lidSwelling: true }] as Partial<ReviewFindings>[]) expect(urgencyOf(signs)).toBe('now')
  })

  // Toxic anterior segment syndrome: 12 to 48 h after surgery, limbus-to-limbus oedema, fibrin or hypopyon, little or no pain (entokey chapter; CRSToday 2006).
  test('a painless toxic pattern on day one is treated as infection until excluded', () => {
    expect(fired({ painScore: 0, oedemaGrade: 4, oedemaLimbusToLimbus: true, fibrin: true })).toContain('segment.toxic-pattern')
    expect(urgencyOf({ painScore: 0, oedemaGrade: 4, oedemaLimbusToLimbus: true, fibrin: true })).toBe('now')
  })

  // Two cases on one list of 12 by chance: 2.6e-6 at 0.02 % and 1.3e-4 at 0.14 % (binomial, computed here).
  test('two on one list are never chance', () => {
    const twoOrMoreOf12 = (rate: number) => 1 - (1 - rate) ** 12 - 12 * rate * (1 - rate) ** 11
    expect(twoOrMoreOf12(0.0002)).toBeLessThan(3e-6)
    expect(twoOrMoreOf12(0.0014)).toBeLessThan(1.4e-4)
    expect(fired({ fibrin: true, hypopyonMm: 1 }, { otherSuspectedOnList: 1 })).toContain('list.cluster')
  })
})

describe('the anterior chamber', () => {
  // SUN Working Group 2005, Am J Ophthalmol 140:509-516: flare 4+ is "fibrin or plastic aqueous".
  test('flare 4+ is fibrin', () => {
    expect(fired({ flare: '4+', fibrin: false })).toContain('chamber.fibrin')
  })

  // Common practice: 0.5+ to 2+ cells and 0 to 2+ flare are ordinary on day one.
  test('ordinary cells and flare of day one raise nothing', () => {
    for (const cells of ['0', '0.5+', '1+', '2+'] as const) for (const flare of ['0', '1+', '2+'] as const) expect(urgencyOf({ cells, flare })).toBeNull()
  })
})

describe('corneal oedema', () => {
  // "Corneal endothelial damage and its repair after phacoemulsification", 105 eyes: days to clear 2.1 (SD 0.7), 5.6 (1.9), 21.8 (7.1) for grades 1, 2, 3.
  test('lasts too long beyond the published mean and two standard deviations', () => {
    const expectedByDay = [[1, 2.1, 0.7], [2, 5.6, 1.9], [3, 21.8, 7.1]].map(([grade, mean, sd]) => [grade, Math.round((mean! + 2 * sd!) * 10) / 10])
    expect(expectedByDay).toEqual([[1, 3.5], [2, 9.4], [3, 36]])
    expect(limitOf('cornea.oedema-lasting', 'gradeTwoAfterDay')).toBe(Math.floor(9.4))
    expect(fired({ oedemaGrade: 2 }, { daysAfterSurgery: 9 })).not.toContain('cornea.oedema-lasting')
    expect(fired({ oedemaGrade: 2 }, { daysAfterSurgery: 10 })).toContain('cornea.oedema-lasting')
  })

  // Grade 1 is left until day 28 (proposed); a clinical lead may tighten it towards the published 3.5 days.
  test('grade 1 may be tightened to a week', () => {
    expect(escalationRules.find(rule => rule.id === 'cornea.oedema-lasting')?.thresholds.gradeOneAfterDay?.safe).toEqual([7, 28])
  })
})

describe('pressure', () => {
  // The reference table of boundaries: 5, 6, 7, 8, 21, 22, 24, 25, 29, 30, 34, 35, 39, 40 (anchors Ahmed 2002; Wills Eye Manual, 8th edition; proposed).
  test.each([
    [5, 'today', 'today'], [6, 'this-week', 'this-week'], [7, 'this-week', 'this-week'], [8, null, null], [21, null, null], [22, null, 'this-week'], [24, null, 'this-week'],
    [25, 'this-week', 'this-week'], [29, 'this-week', 'this-week'], [30, 'today', 'today'], [34, 'today', 'today'], [35, 'today', 'now'], [39, 'today', 'now'], [40, 'now', 'now'],
  ] as const)('%d mmHg is %s, in an eye at risk %s', (iopMmHg, other, atRisk) => {
    const context = { preoperative: { bestLogMar: 0.5 } }
    expect(urgencyOf({ iopMmHg }, context)).toBe(other)
    expect(urgencyOf({ iopMmHg }, { ...context, riskReasons: ['optic-neuropathy'] })).toBe(atRisk)
  })

  // Chang, Tan, Tripodis 2011: a rise of more than 25 % with at least 28 mmHg on steroid drops.
  test('28 mmHg on steroid drops is a response only above a rise of 25 %', () => {
    const context = { daysAfterSurgery: 14, onSteroidDrops: true }
    expect(fired({ iopMmHg: 28 }, { ...context, preoperative: { iopMmHg: 28 / 1.25 } })).not.toContain('pressure.steroid-response')
    expect(fired({ iopMmHg: 28 }, { ...context, preoperative: { iopMmHg: 22 } })).toContain('pressure.steroid-response')
  })
})

describe('sight', () => {
  // Loss in audits is a doubling of the visual angle: 0.30 logMAR (from memory). The pair 0.18, 0.48 is the reference's own;
  // 0.7 - 0.4 computes to 0.29999… and is a loss all the same; 0.58 - 0.30 is 0.28, and is none.
  test('a fall of 0.30 logMAR counts although its difference computes below', () => {
    expect(0.7 - 0.4).toBeLessThan(0.3)
    expect(fired(sees(0.7), { preoperative: { bestLogMar: 0.4 } })).toContain('vision.worse')
    expect(fired(sees(0.48), { preoperative: { bestLogMar: 0.18 } })).toContain('vision.worse')
    expect(fired(sees(0.58), { preoperative: { bestLogMar: 0.3 } })).not.toContain('vision.worse')
  })
})
