import { describe, expect, test } from 'vitest'
import { evaluateReview } from '#shared/domain/escalation/evaluate'
import { escalationRules } from '#shared/domain/escalation/rules'
import { ruleLabels } from '#shared/domain/escalation/rule-kit'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { dayOneContext, quietFindings, sees } from '#tests/factories/escalation'

type Answer = Urgency | undefined
const infected = { fibrin: true, hypopyonMm: 1 }
const toxic = { oedemaGrade: 3, oedemaLimbusToLimbus: true } as const
const onDay = (daysAfterSurgery: number) => ({ daysAfterSurgery })
const atRisk = { riskReasons: ['glaucoma'] } satisfies Partial<ReviewContext>

/** What fires a rule and what leaves it quiet. The sources stand with the rules; 'proposed' and 'common practice' where none is published. */
const rows: [string, Partial<ReviewFindings>, Partial<ReviewContext>, Answer][] = [
  ['infection.suspected', { painGrowing: true, lidSwelling: true }, {}, 'now'],
  ['infection.suspected', { cells: '2+', lidSwelling: true }, {}, undefined],
  ['infection.suspected', { cells: '3+', lidSwelling: true }, {}, 'now'],
  ['infection.suspected', { flare: '4+', vitreousCells: true }, {}, 'now'],
  ['infection.suspected', { hypopyonMm: 0.1, redReflex: 'dull' }, {}, 'now'],
  ['infection.suspected', { ...sees(0.8), redReflex: 'absent' }, {}, 'now'],
  ['infection.suspected', { ...sees(0.8), redReflex: 'absent', acuityReason: 'Macular scar, known' }, {}, undefined],
  ['infection.suspected', { ...sees(0.4), lidSwelling: true, acuityReason: 'Macular scar, known' }, { previous: { bestLogMar: 0.1 } }, 'now'],
  ['segment.toxic-pattern', { ...toxic, cells: '2+' }, {}, undefined],
  ['segment.toxic-pattern', { ...toxic, cells: '3+' }, {}, 'now'],
  ['segment.toxic-pattern', { ...toxic, fibrin: true }, {}, 'now'],
  ['segment.toxic-pattern', { ...toxic, hypopyonMm: 0.5 }, onDay(2), 'now'],
  ['segment.toxic-pattern', { ...toxic, hypopyonMm: 0.5 }, onDay(3), undefined],
  ['segment.toxic-pattern', { ...toxic, oedemaGrade: 2, cells: '4+' }, {}, undefined],
  ['segment.toxic-pattern', { ...toxic, oedemaLimbusToLimbus: false, cells: '4+' }, {}, undefined],
  ['list.cluster', infected, {}, undefined],
  ['list.cluster', infected, { otherSuspectedOnList: 1 }, 'now'],
  ['list.cluster', infected, { otherSuspectedAtSiteThisWeek: 1 }, 'now'],
  ['list.cluster', { ...toxic, cells: '3+' }, { otherSuspectedOnList: 1 }, 'now'],
  ['list.cluster', { hypopyonMm: 1 }, { otherSuspectedOnList: 1 }, undefined],
  ['chamber.hypopyon', { hypopyonMm: 0 }, {}, undefined],
  ['chamber.hypopyon', { hypopyonMm: 0.1 }, {}, 'now'],
  ['chamber.fibrin', { flare: '3+' }, {}, undefined],
  ['chamber.fibrin', { flare: '4+' }, {}, 'now'],
  ['chamber.fibrin', { fibrin: true }, {}, 'now'],
  ['chamber.cells-4', { cells: '3+' }, {}, undefined],
  ['chamber.cells-4', { cells: '4+' }, {}, 'now'],
  ['chamber.cells-3', { cells: '2+' }, {}, undefined],
  ['chamber.cells-3', { cells: '3+' }, {}, 'today'],
  ['chamber.cells-lasting', { cells: '1+' }, { daysAfterSurgery: 20, daysSinceDropsStopped: 0 }, undefined],
  ['chamber.cells-lasting', { cells: '1+' }, { daysAfterSurgery: 20, daysSinceDropsStopped: 1 }, 'this-week'],
  ['chamber.cells-lasting', { cells: '0.5+' }, { daysAfterSurgery: 40, daysSinceDropsStopped: 12 }, undefined],
  ['chamber.flat', { chamberDepth: 'shallow' }, {}, undefined],
  ['chamber.flat', { chamberDepth: 'flat' }, {}, 'now'],
  ['chamber.shallow', { chamberDepth: 'deep' }, {}, undefined],
  ['chamber.shallow', { chamberDepth: 'shallow' }, {}, 'today'],
  ['chamber.hyphaema', { hyphaema: 'micro' }, {}, undefined],
  ['chamber.hyphaema', { hyphaema: 'I' }, {}, 'today'],
  ['chamber.hyphaema', { hyphaema: 'III' }, {}, 'today'],
  ['chamber.hyphaema', { hyphaema: 'IV' }, {}, 'now'],
  ['chamber.vitreous', { vitreousInChamber: false }, {}, undefined],
  ['chamber.vitreous', { vitreousInChamber: true }, {}, 'today'],
  ['cornea.oedema-3', { oedemaGrade: 2 }, {}, undefined],
  ['cornea.oedema-3', { oedemaGrade: 3 }, {}, 'today'],
  ['cornea.oedema-3', { oedemaGrade: 4 }, {}, 'today'],
  ['cornea.oedema-lasting', { oedemaGrade: 0 }, onDay(90), undefined],
  ['cornea.infiltrate', { infiltrate: false }, {}, undefined],
  ['cornea.infiltrate', { infiltrate: true }, {}, 'now'],
  ['cornea.defect', { epithelialDefectMm: 0 }, {}, undefined],
  ['wound.leak', { seidel: 'provoked' }, {}, undefined],
  ['wound.leak', { seidel: 'spontaneous' }, {}, 'today'],
  ['wound.leak', { wound: 'leaking' }, {}, 'today'],
  ['wound.leak', { seidel: 'spontaneous', chamberDepth: 'shallow' }, {}, 'now'],
  ['wound.leak', { seidel: 'spontaneous', chamberDepth: 'flat' }, {}, 'now'],
  ['wound.leak', { seidel: 'spontaneous', irisInWound: true }, {}, 'now'],
  ['wound.provoked-leak', { seidel: 'negative' }, {}, undefined],
  ['wound.provoked-leak', { seidel: 'provoked' }, {}, 'this-week'],
  ['wound.provoked-leak', { seidel: 'provoked', wound: 'leaking' }, {}, undefined],
  ['wound.iris', { irisInWound: false }, {}, undefined],
  ['wound.iris', { irisInWound: true }, {}, 'now'],
  ['wound.gape', { wound: 'sealed' }, {}, undefined],
  ['wound.gape', { wound: 'gaping' }, {}, 'today'],
  ['pressure.low', { iopMmHg: 8 }, {}, undefined],
  ['pressure.low', { iopMmHg: 7 }, {}, 'this-week'],
  ['pressure.low', { iopMmHg: 7, chamberDepth: 'shallow' }, {}, 'today'],
  ['pressure.low', { iopMmHg: 5, seidel: 'spontaneous' }, {}, 'now'],
  ['pressure.low', { iopMmHg: 6 }, atRisk, 'this-week'],
  ['pressure.raised', { iopMmHg: 24 }, {}, undefined],
  ['pressure.raised', { iopMmHg: 21 }, atRisk, undefined],
  ['pressure.raised', { iopMmHg: 22 }, atRisk, 'this-week'],
  ['pressure.rise', { iopMmHg: 30 }, {}, 'today'],
  ['pressure.rise', { iopMmHg: 36 }, {}, 'now'],
  ['pressure.rise', { iopMmHg: 20 }, { preoperative: { iopMmHg: 10 } }, undefined],
  ['pressure.rise', { iopMmHg: 20 }, { ...atRisk, preoperative: { iopMmHg: 10 } }, 'this-week'],
  ['pressure.symptoms', { iopMmHg: 30 }, {}, undefined],
  ['pressure.symptoms', { iopMmHg: 30, vomiting: true }, {}, 'now'],
  ['pressure.steroid-response', { iopMmHg: 28 }, { ...onDay(14), onSteroidDrops: false }, undefined],
  ['pressure.steroid-response', { iopMmHg: 28 }, { ...onDay(14), preoperative: { iopMmHg: 22.4 } }, undefined],
  ['pressure.steroid-response', { iopMmHg: 28 }, { ...onDay(14), preoperative: { iopMmHg: 22 } }, 'today'],
  ['lens.displaced', { lensPosition: 'centred' }, {}, undefined],
  ['lens.displaced', { lensPosition: 'decentred' }, {}, 'this-week'],
  ['lens.displaced', { lensPosition: 'tilted' }, {}, 'this-week'],
  ['lens.displaced', { lensPosition: 'tilted', vitreousInChamber: true }, {}, 'today'],
  ['lens.displaced', { lensPosition: 'centred', vitreousInChamber: true }, {}, undefined],
  ['lens.displaced', { lensTouchesCornea: true }, {}, 'today'],
  ['lens.displaced', { lensPosition: 'out-of-bag' }, {}, 'today'],
  ['lens.fragment', { lensFragment: 'none' }, {}, undefined],
  ['lens.fragment', { lensFragment: 'anterior', oedemaGrade: 2 }, {}, 'this-week'],
  ['lens.fragment', { lensFragment: 'anterior', oedemaGrade: 3 }, {}, 'today'],
  ['lens.fragment', { lensFragment: 'posterior' }, {}, 'today'],
  ['lens.not-as-planned', {}, { lensAsPlanned: false, lensDeviationExplained: true }, undefined],
  ['lens.not-as-planned', {}, { lensAsPlanned: false }, 'today'],
  ['lens.not-as-planned', {}, { lensAsPlanned: undefined }, undefined],
  ['outcome.refraction-surprise', { refractionSphereD: 3 }, { predictedRefractionD: undefined }, undefined],
  ['outcome.refraction-surprise', { refractionSphereD: 0, refractionCylinderD: -3 }, { predictedRefractionD: 0 }, 'this-week'],
  ['retina.reflex', { redReflex: 'dull' }, {}, undefined],
  ['retina.reflex', { redReflex: 'absent' }, {}, 'today'],
  ['retina.reflex', { redReflex: 'absent' }, { preoperative: {} }, 'today'],
  ['retina.reflex', { redReflex: 'absent' }, { preoperative: { redReflex: 'absent' } }, undefined],
  ['retina.reflex', { redReflex: 'absent' }, { preoperative: { redReflex: 'absent' }, previous: { redReflex: 'normal' } }, 'today'],
  ['retina.symptoms', { flashesOrFloaters: false }, {}, undefined],
  ['retina.symptoms', { flashesOrFloaters: true }, {}, 'today'],
  ['retina.symptoms', { flashesOrFloaters: true, curtainOrFieldLoss: true }, {}, 'now'],
  ['vision.lost', sees(2.7), { preoperative: { bestLogMar: 2.7 } }, undefined],
  ['vision.lost', sees(3), { preoperative: { bestLogMar: 2.7 } }, 'now'],
  ['vision.lost', sees(2.7), { preoperative: {} }, 'now'],
  ['vision.lost', { ...sees(2.7), acuityPinhole: { logMar: 2.3, entered: 'HM' } }, {}, undefined],
  ['vision.worse', { ...sees(0.8), oedemaGrade: 1 }, {}, 'today'],
  ['vision.worse', { ...sees(0.8), oedemaGrade: 2 }, onDay(7), undefined],
  ['vision.worse', { ...sees(0.8), oedemaGrade: 2 }, onDay(8), 'today'],
  ['vision.worse', { ...sees(0.8), acuityReason: 'Macular scar, known' }, onDay(30), undefined],
  ['vision.worse', { ...sees(0.8), acuityReason: '  ' }, onDay(30), 'today'],
  ['vision.worse', { ...sees(0.8), acuityPinhole: { logMar: 0.7, entered: '0.7' } }, {}, undefined],
  ['pain.severe', { painScore: 10 }, {}, 'now'],
  ['pain.moderate', { painScore: 7 }, {}, undefined],
  ['drops.allergy', { dropsAllergy: false }, {}, undefined],
  ['drops.allergy', { dropsAllergy: true }, {}, 'today'],
  ['drops.not-used', { dropsUse: 'partly' }, {}, undefined],
  ['drops.not-used', { dropsUse: 'finished' }, {}, undefined],
  ['drops.not-used', { dropsUse: 'not-using' }, {}, 'this-week'],
  ['drops.not-used', { dropsUse: 'cannot-use' }, {}, 'this-week'],
]

type Probe = [rule: string, limit: string, at: (value: number) => [Partial<ReviewFindings>, Partial<ReviewContext>?], below: [number, Answer], on: [number, Answer], above: [number, Answer]]
/** Each limit just below, at and just above its starting value. */
const probes: Probe[] = [
  ['infection.suspected', 'signs', count => [{ lidSwelling: count >= 1, vitreousCells: count >= 2, fibrin: count >= 3 }], [1, undefined], [2, 'now'], [3, 'now']],
  ['infection.suspected', 'painFrom', painScore => [{ painScore, lidSwelling: true }], [3, undefined], [4, 'now'], [5, 'now']],
  ['infection.suspected', 'painGrowthBy', by => [{ painScore: 3, lidSwelling: true }, { previous: { painScore: 3 - by } }], [1, undefined], [2, 'now'], [3, 'now']],
  ['infection.suspected', 'acuityFallLogMar', fall => [{ ...sees(0.18 + fall), lidSwelling: true }, { preoperative: { bestLogMar: 0.18 } }], [0.28, undefined], [0.3, 'now'], [0.32, 'now']],
  ['chamber.cells-lasting', 'twoPlusFromDay', day => [{ cells: '2+' }, onDay(day)], [6, undefined], [7, 'this-week'], [8, 'this-week']],
  ['chamber.cells-lasting', 'onePlusFromDay', day => [{ cells: '1+' }, onDay(day)], [27, undefined], [28, 'this-week'], [29, 'this-week']],
  ['chamber.hyphaema', 'pressureMmHg', iopMmHg => [{ hyphaema: 'micro', iopMmHg }], [24, undefined], [25, 'today'], [26, 'today']],
  ['cornea.oedema-lasting', 'gradeTwoAfterDay', day => [{ oedemaGrade: 2 }, onDay(day)], [8, undefined], [9, undefined], [10, 'this-week']],
  ['cornea.oedema-lasting', 'gradeOneAfterDay', day => [{ oedemaGrade: 1 }, onDay(day)], [27, undefined], [28, undefined], [29, 'this-week']],
  ['cornea.defect', 'overMm', epithelialDefectMm => [{ epithelialDefectMm }], [0.9, undefined], [1, undefined], [1.1, 'today']],
  ['wound.leak', 'pressureMmHg', iopMmHg => [{ seidel: 'spontaneous', iopMmHg }], [4, 'now'], [5, 'now'], [6, 'today']],
  ['pressure.low', 'todayUpToMmHg', iopMmHg => [{ iopMmHg }], [4, 'today'], [5, 'today'], [6, 'this-week']],
  ['pressure.rise', 'riseMmHg', rise => [{ iopMmHg: 27 }, { preoperative: { iopMmHg: 27 - rise } }], [9, undefined], [10, 'today'], [11, 'today']],
  ['pressure.raised', 'todayFromMmHg', iopMmHg => [{ iopMmHg }, { preoperative: { iopMmHg: 22 } }], [29, 'this-week'], [30, 'today'], [31, 'today']],
  ['pressure.raised', 'nowFromMmHg', iopMmHg => [{ iopMmHg }, { preoperative: {} }], [39, 'today'], [40, 'now'], [41, 'now']],
  ['pressure.raised', 'atRiskNowFromMmHg', iopMmHg => [{ iopMmHg }, { ...atRisk, preoperative: {} }], [34, 'today'], [35, 'now'], [36, 'now']],
  ['pressure.symptoms', 'fromMmHg', iopMmHg => [{ iopMmHg, vomiting: true }], [29, undefined], [30, 'now'], [31, 'now']],
  ['pressure.symptoms', 'painFrom', painScore => [{ iopMmHg: 30, painScore }], [3, undefined], [4, 'now'], [5, 'now']],
  ['pressure.symptoms', 'oedemaFrom', grade => [{ iopMmHg: 30, oedemaGrade: grade as 1 | 2 | 3 }], [1, undefined], [2, 'now'], [3, 'now']],
  ['pressure.steroid-response', 'fromDay', day => [{ iopMmHg: 28 }, onDay(day)], [13, undefined], [14, 'today'], [15, 'today']],
  ['pressure.steroid-response', 'fromMmHg', iopMmHg => [{ iopMmHg }, onDay(14)], [27, undefined], [28, 'today'], [29, 'today']],
  ['lens.fragment', 'pressureMmHg', iopMmHg => [{ lensFragment: 'anterior', iopMmHg }], [29, 'this-week'], [30, 'today'], [31, 'today']],
  ['outcome.refraction-surprise', 'weekOverD', byD => [{ refractionSphereD: byD }, { predictedRefractionD: 0 }], [0.99, undefined], [1, undefined], [1.01, 'this-week']],
  ['outcome.refraction-surprise', 'todayOverD', byD => [{ refractionSphereD: -byD }, { predictedRefractionD: 0 }], [1.99, 'this-week'], [2, 'this-week'], [2.01, 'today']],
  ['vision.lost', 'lightOnlyLogMar', logMar => [sees(logMar)], [2.6, undefined], [2.7, 'now'], [3, 'now']],
  ['vision.worse', 'fallLogMar', fall => [sees(0.18 + fall), { preoperative: { bestLogMar: 0.18 } }], [0.28, undefined], [0.3, 'today'], [0.32, 'today']],
  ['pain.severe', 'from', painScore => [{ painScore }], [6, undefined], [7, 'now'], [8, 'now']],
  ['pain.moderate', 'from', painScore => [{ painScore }], [3, undefined], [4, 'today'], [5, 'today']],
]

const answerOf = (ruleId: string, findings: Partial<ReviewFindings>, context: Partial<ReviewContext> = {}) =>
  evaluateReview({ ...quietFindings, ...findings }, { ...dayOneContext, ...context }).reasons.find(reason => reason.ruleId === ruleId)?.urgency

describe('the rule table', () => {
  test.each(rows)('%s with %j and %j answers %s', (ruleId, findings, context, urgency) => {
    expect(answerOf(ruleId, findings, context)).toBe(urgency)
  })

  test.each(probes)('%s turns at its limit %s', (ruleId, _limit, make, ...points) => {
    for (const [value, urgency] of points) expect([value, answerOf(ruleId, ...make(value))]).toEqual([value, urgency])
  })

  test('every rule has rows that fire it and rows that leave it quiet', () => {
    const fires = new Set([...rows.filter(row => row[3]).map(row => row[0]), ...probes.map(probe => probe[0])])
    const stays = new Set([...rows.filter(row => !row[3]).map(row => row[0]), ...probes.filter(probe => [probe[3], probe[4], probe[5]].some(point => point[1] === undefined)).map(probe => probe[0])])
    expect([...fires].sort()).toEqual(escalationRules.map(rule => rule.id).sort())
    expect([...stays].sort()).toEqual(escalationRules.map(rule => rule.id).sort())
  })

  test('every limit has its points, and the middle one is its starting value', () => {
    expect(probes.map(([ruleId, name]) => `${ruleId}.${name}`).sort()).toEqual(escalationRules.flatMap(rule => Object.keys(rule.thresholds).map(name => `${rule.id}.${name}`)).sort())
    for (const [ruleId, name, , below, on, above] of probes) {
      expect([ruleId, name, escalationRules.find(rule => rule.id === ruleId)?.thresholds[name]?.value]).toEqual([ruleId, name, on[0]])
      expect(below[0] < on[0] && on[0] < above[0]).toBe(true)
    }
  })

  test('ids are unique, and each rule has its version, source, label and words', () => {
    expect(new Set(escalationRules.map(rule => rule.id)).size).toBe(escalationRules.length)
    for (const rule of escalationRules) {
      expect(rule.id).toMatch(/^[a-z]+\.[a-z0-9-]+$/)
      expect(rule.version).toBeGreaterThanOrEqual(1)
      expect(ruleLabels).toContain(rule.label)
      expect(rule.source.length > 0 && rule.when.length > 0).toBe(true)
      if (rule.label === 'citation') expect(rule.source).not.toBe('proposed')
    }
  })

  test('a limit starts at the loose end of its safe bounds, so that it can only be tightened', () => {
    for (const rule of escalationRules) for (const { value, safe: [least, most], tighten } of Object.values(rule.thresholds)) {
      expect(least).toBeLessThan(most)
      expect(value).toBe(tighten === 'lower' ? most : least)
    }
  })

  test('a quiet day-one eye raises nothing and leaves nothing unchecked', () => {
    expect(evaluateReview(quietFindings, dayOneContext)).toEqual({ reasons: [], urgency: null, unchecked: [] })
  })

  test('no rule looks at ultrasound energy, length of surgery or density of the nucleus', () => {
    for (const rule of escalationRules) expect(`${rule.id} ${rule.when} ${rule.evaluate}`).not.toMatch(/ultrasound|energy|nucle|duration|minutes/i)
  })
})
