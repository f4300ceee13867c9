import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { checkThresholds, evaluateReview } from '#shared/domain/escalation/evaluate'
import { escalationRules } from '#shared/domain/escalation/rules'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import { cellGrades } from '#shared/domain/review/vocabulary'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'

const context: ReviewContext = { visitKind: 'day-one', daysAfterSurgery: 1, riskReasons: [], preoperative: { bestLogMar: 0.5, iopMmHg: 15 } }
const quiet: ReviewFindings = { painScore: 0, acuityUnaided: { logMar: 0.2, entered: '6/9' }, iopMmHg: 15, oedemaGrade: 0, cells: '1+', flare: '1+', wound: 'sealed', seidel: 'negative', chamberDepth: 'deep', lensPosition: 'centred', redReflex: 'normal' }

/** Each rule below and at its threshold. The sources are named with the rules themselves; the values are those of the rule table. */
const table: [string, Partial<ReviewFindings>, Partial<ReviewContext>, Urgency | undefined][] = [
  ['infection.suspected', { painScore: 4 }, {}, undefined], ['infection.suspected', { painScore: 4, cells: '3+' }, {}, 'now'], ['infection.suspected', { painScore: 3, cells: '3+' }, {}, undefined],
  ['chamber.hypopyon', { hypopyonMm: 0 }, {}, undefined], ['chamber.hypopyon', { hypopyonMm: 0.1 }, {}, 'now'],
  ['chamber.fibrin', { flare: '3+' }, {}, undefined], ['chamber.fibrin', { flare: '4+' }, {}, 'now'],
  ['chamber.cells-4', { cells: '3+' }, {}, undefined], ['chamber.cells-4', { cells: '4+' }, {}, 'now'],
  ['chamber.cells-3', { cells: '2+' }, {}, undefined], ['chamber.cells-3', { cells: '3+' }, {}, 'today'],
  ['chamber.cells-lasting', { cells: '2+' }, { daysAfterSurgery: 6 }, undefined], ['chamber.cells-lasting', { cells: '2+' }, { daysAfterSurgery: 7 }, 'this-week'], ['chamber.cells-lasting', { cells: '1+' }, { daysAfterSurgery: 28 }, 'this-week'],
  ['segment.toxic-pattern', { oedemaGrade: 3, oedemaLimbusToLimbus: true, cells: '2+' }, {}, undefined], ['segment.toxic-pattern', { oedemaGrade: 3, oedemaLimbusToLimbus: true, cells: '3+' }, {}, 'now'], ['segment.toxic-pattern', { oedemaGrade: 3, oedemaLimbusToLimbus: true, cells: '3+' }, { daysAfterSurgery: 3 }, undefined],
  ['list.cluster', { fibrin: true, hypopyonMm: 1 }, {}, undefined], ['list.cluster', { fibrin: true, hypopyonMm: 1 }, { otherSuspectedOnList: 1 }, 'now'],
  ['cornea.oedema-3', { oedemaGrade: 2 }, {}, undefined], ['cornea.oedema-3', { oedemaGrade: 3 }, {}, 'today'],
  ['cornea.oedema-lasting', { oedemaGrade: 2 }, { daysAfterSurgery: 9 }, undefined], ['cornea.oedema-lasting', { oedemaGrade: 2 }, { daysAfterSurgery: 10 }, 'this-week'], ['cornea.oedema-lasting', { oedemaGrade: 1 }, { daysAfterSurgery: 28 }, undefined], ['cornea.oedema-lasting', { oedemaGrade: 1 }, { daysAfterSurgery: 29 }, 'this-week'],
  ['cornea.infiltrate', { infiltrate: false }, {}, undefined], ['cornea.infiltrate', { infiltrate: true }, {}, 'now'],
  ['cornea.defect', { epithelialDefectMm: 1 }, {}, undefined], ['cornea.defect', { epithelialDefectMm: 1.1 }, {}, 'today'],
  ['wound.leak', { seidel: 'spontaneous' }, {}, 'today'], ['wound.leak', { seidel: 'spontaneous', iopMmHg: 6 }, {}, 'today'], ['wound.leak', { seidel: 'spontaneous', iopMmHg: 5 }, {}, 'now'], ['wound.leak', { seidel: 'spontaneous', chamberDepth: 'shallow' }, {}, 'now'],
  ['wound.provoked-leak', { seidel: 'negative' }, {}, undefined], ['wound.provoked-leak', { seidel: 'provoked' }, {}, 'this-week'],
  ['wound.iris', { irisInWound: true }, {}, 'now'], ['wound.gape', { wound: 'gaping' }, {}, 'today'], ['chamber.flat', { chamberDepth: 'flat' }, {}, 'now'], ['chamber.shallow', { chamberDepth: 'shallow' }, {}, 'today'],
  ['chamber.hyphaema', { hyphaema: 'micro', iopMmHg: 24 }, {}, undefined], ['chamber.hyphaema', { hyphaema: 'micro', iopMmHg: 25 }, {}, 'today'], ['chamber.hyphaema', { hyphaema: 'I' }, {}, 'today'], ['chamber.hyphaema', { hyphaema: 'IV' }, {}, 'now'],
  ['chamber.vitreous', { vitreousInChamber: true }, {}, 'today'],
  ['lens.displaced', { lensPosition: 'centred' }, {}, undefined], ['lens.displaced', { lensPosition: 'tilted' }, {}, 'this-week'], ['lens.displaced', { lensPosition: 'out-of-bag' }, {}, 'today'],
  ['lens.fragment', { lensFragment: 'anterior', iopMmHg: 29 }, {}, 'this-week'], ['lens.fragment', { lensFragment: 'anterior', iopMmHg: 30 }, {}, 'today'], ['lens.fragment', { lensFragment: 'posterior' }, {}, 'today'],
  ['lens.not-as-planned', {}, { lensAsPlanned: false, lensDeviationExplained: true }, undefined], ['lens.not-as-planned', {}, { lensAsPlanned: false }, 'today'],
  ['outcome.refraction-surprise', { refractionSphereD: 1 }, { predictedRefractionD: 0 }, undefined], ['outcome.refraction-surprise', { refractionSphereD: 1.25 }, { predictedRefractionD: 0 }, 'this-week'], ['outcome.refraction-surprise', { refractionSphereD: -2.25 }, { predictedRefractionD: 0 }, 'today'],
  ['retina.reflex', { redReflex: 'dull' }, {}, undefined], ['retina.reflex', { redReflex: 'absent' }, {}, 'today'], ['retina.symptoms', { flashesOrFloaters: true }, {}, 'today'], ['retina.symptoms', { curtainOrFieldLoss: true }, {}, 'now'],
  ['vision.lost', { acuityUnaided: { logMar: 2.3, entered: 'HM' } }, {}, undefined], ['vision.lost', { acuityUnaided: { logMar: 2.7, entered: 'PL' } }, {}, 'now'],
  ['vision.worse', { acuityUnaided: { logMar: 0.79, entered: '0.79' } }, {}, undefined], ['vision.worse', { acuityUnaided: { logMar: 0.8, entered: '0.8 logMAR' } }, {}, 'today'], ['vision.worse', { acuityUnaided: { logMar: 0.8, entered: '0.8 logMAR' }, oedemaGrade: 2 }, {}, undefined],
  ['pain.severe', { painScore: 6 }, {}, undefined], ['pain.severe', { painScore: 7 }, {}, 'now'], ['pain.moderate', { painScore: 3 }, {}, undefined], ['pain.moderate', { painScore: 4 }, {}, 'today'],
  ['drops.allergy', { dropsAllergy: true }, {}, 'today'], ['drops.not-used', { dropsUse: 'partly' }, {}, undefined], ['drops.not-used', { dropsUse: 'not-using' }, {}, 'this-week'],
]

describe('the rule table', () => {
  test.each(table)('%s with %j and %j answers %s', (ruleId, findings, changes, urgency) => {
    const found = evaluateReview({ ...quiet, ...findings }, { ...context, ...changes }).reasons.find(reason => reason.ruleId === ruleId)
    expect(found?.urgency).toBe(urgency)
  })

  test('every rule has its rows in the table', () => {
    expect(new Set(table.map(([ruleId]) => ruleId))).toEqual(new Set(escalationRules.map(rule => rule.id)))
  })

  test('a quiet day-one eye raises nothing, whatever the ultrasound energy was', () => {
    expect(evaluateReview(quiet, context).urgency).toBeNull()
  })

  test('a threshold may be tightened within its bounds and never loosened', () => {
    expect(() => checkThresholds({ 'pain.moderate': { from: 3 } })).not.toThrow()
    expect(() => checkThresholds({ 'pain.moderate': { from: 5 } })).toThrow('refused')
    expect(evaluateReview({ ...quiet, painScore: 3 }, context, { 'pain.moderate': { from: 3 } }).urgency).toBe('today')
  })
})

const rank = (urgency: Urgency | null) => urgency === null ? 3 : urgencies.indexOf(urgency)

describe('making a finding worse', () => {
  const anyFindings: fc.Arbitrary<ReviewFindings> = fc.record({
    painScore: fc.integer({ min: 0, max: 10 }), iopMmHg: fc.integer({ min: 8, max: 60 }), oedemaGrade: fc.constantFrom(0, 1, 2, 3, 4), cells: fc.constantFrom(...cellGrades), hypopyonMm: fc.constantFrom(0, 0.5, 2),
    seidel: fc.constantFrom('negative', 'provoked', 'spontaneous'), chamberDepth: fc.constantFrom('deep', 'shallow', 'flat'), fibrin: fc.boolean(), lidSwelling: fc.boolean(), irisInWound: fc.boolean(),
  }, { requiredKeys: [] })

  test.each<[string, (findings: ReviewFindings) => ReviewFindings]>([
    ['more pain', findings => ({ ...findings, painScore: Math.min(10, (findings.painScore ?? 0) + 2) })],
    ['more cells', findings => ({ ...findings, cells: cellGrades[Math.min(5, cellGrades.indexOf(findings.cells ?? '0') + 1)] })],
    ['higher pressure', findings => ({ ...findings, iopMmHg: Math.max(22, findings.iopMmHg ?? 22) + 5 })],
    ['hypopyon', findings => ({ ...findings, hypopyonMm: (findings.hypopyonMm ?? 0) + 1 })],
    ['a leak', findings => ({ ...findings, seidel: 'spontaneous' })],
    ['a flat chamber', findings => ({ ...findings, chamberDepth: 'flat' })],
    ['fibrin', findings => ({ ...findings, fibrin: true })],
  ])('%s never lowers the urgency', (_name, worsen) => {
    fc.assert(fc.property(anyFindings, fc.integer({ min: 0, max: 60 }), (findings, daysAfterSurgery) => {
      const before = evaluateReview(findings, { ...context, daysAfterSurgery }).urgency
      const after = evaluateReview(worsen(findings), { ...context, daysAfterSurgery }).urgency
      expect(rank(after)).toBeLessThanOrEqual(rank(before))
    }), { numRuns: 300 })
  })
})
