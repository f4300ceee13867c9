import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { evaluateReview, missingRequiredFindings, wouldBecome } from '#shared/domain/escalation/evaluate'
import { applyThresholds } from '#shared/domain/escalation/thresholds'
import { escalationRules } from '#shared/domain/escalation/rules'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import { cellGrades, chamberDepths, dropsUses, flareGrades, hyphaemaGrades, lensFragments, lensPositions, oedemaGrades, redReflexes, riskReasons, seidelResults, visitKinds, woundStates } from '#shared/domain/review/vocabulary'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { dayOneContext, quietFindings, sees } from '#tests/factories/escalation'

const acuity = fc.integer({ min: -2, max: 30 }).map(tenths => ({ logMar: tenths / 10, entered: String(tenths / 10) }))
const grid = (least: number, most: number, step: number) => fc.integer({ min: 0, max: Math.round((most - least) / step) }).map(index => least + index * step)
const denseFindings: fc.Arbitrary<ReviewFindings> = fc.record({
  painScore: fc.integer({ min: 0, max: 10 }), painGrowing: fc.boolean(), vomiting: fc.boolean(), acuityUnaided: acuity, acuityPinhole: acuity, acuityReason: fc.constantFrom('', 'Macular scar, known'),
  iopMmHg: grid(0, 80, 0.5), oedemaGrade: fc.constantFrom(...oedemaGrades), oedemaLimbusToLimbus: fc.boolean(), infiltrate: fc.boolean(), epithelialDefectMm: grid(0, 3, 0.5),
  wound: fc.constantFrom(...woundStates), seidel: fc.constantFrom(...seidelResults), irisInWound: fc.boolean(), chamberDepth: fc.constantFrom(...chamberDepths), cells: fc.constantFrom(...cellGrades), flare: fc.constantFrom(...flareGrades), fibrin: fc.boolean(), hypopyonMm: grid(0, 3, 0.5), hyphaema: fc.constantFrom(...hyphaemaGrades),
  vitreousInChamber: fc.boolean(), vitreousCells: fc.boolean(), lensPosition: fc.constantFrom(...lensPositions), lensTouchesCornea: fc.boolean(), lensFragment: fc.constantFrom(...lensFragments), redReflex: fc.constantFrom(...redReflexes), lidSwelling: fc.boolean(), flashesOrFloaters: fc.boolean(), curtainOrFieldLoss: fc.boolean(), dropsUse: fc.constantFrom(...dropsUses), dropsAllergy: fc.boolean(),
  refractionSphereD: grid(-4, 4, 0.25), refractionCylinderD: grid(-3, 0, 0.25),
}, { requiredKeys: [] })
/**
 * Sheets of every urgency: a dense random one is nearly always `now`, where nothing could be lowered, so most sheets here are quiet or empty
 * but for a few findings.
 */
const anyFindings: fc.Arbitrary<ReviewFindings> = fc.oneof(
  { weight: 1, arbitrary: denseFindings },
  { weight: 9, arbitrary: fc.tuple(denseFindings, fc.constantFrom<ReviewFindings>(quietFindings, {}), fc.array(fc.nat(), { maxLength: 4 })).map(([dense, base, picks]) => {
    const names = Object.keys(dense) as (keyof ReviewFindings)[]
    const taken = names.length ? picks.map(pick => names[pick % names.length]!) : []
    return { ...base, ...Object.fromEntries(taken.map(name => [name, dense[name]])) }
  }) },
)
const anyContext: fc.Arbitrary<ReviewContext> = fc.record({
  visitKind: fc.constantFrom(...visitKinds), daysAfterSurgery: fc.integer({ min: 0, max: 60 }), riskReasons: fc.subarray([...riskReasons]),
  preoperative: fc.record({ bestLogMar: grid(-0.2, 3, 0.1), iopMmHg: grid(5, 40, 1), redReflex: fc.constantFrom(...redReflexes) }, { requiredKeys: [] }),
  previous: fc.option(fc.record({ bestLogMar: grid(-0.2, 3, 0.1), iopMmHg: grid(0, 60, 1), redReflex: fc.constantFrom(...redReflexes), painScore: fc.integer({ min: 0, max: 10 }) }, { requiredKeys: [] }), { nil: undefined }),
  onSteroidDrops: fc.option(fc.boolean(), { nil: undefined }), daysSinceDropsStopped: fc.option(fc.integer({ min: 0, max: 30 }), { nil: undefined }),
  lensAsPlanned: fc.option(fc.boolean(), { nil: undefined }), lensDeviationExplained: fc.option(fc.boolean(), { nil: undefined }), predictedRefractionD: fc.option(grid(-3, 1, 0.25), { nil: undefined }),
  otherSuspectedOnList: fc.integer({ min: 0, max: 2 }), otherSuspectedAtSiteThisWeek: fc.integer({ min: 0, max: 2 }),
})
const rank = (urgency: Urgency | null) => urgency === null ? urgencies.length : urgencies.indexOf(urgency)
const worse = <T>(order: readonly T[], value: T | undefined, by: number): T => order[Math.min(order.length - 1, (value === undefined ? -1 : order.indexOf(value)) + by)]!

/** Each finding made worse by one or more steps; an unrecorded finding is made worse by recording a bad one. */
const worsenings: [string, (findings: ReviewFindings, by: number) => ReviewFindings][] = [
  ['more pain', (each, by) => ({ ...each, painScore: Math.min(10, (each.painScore ?? 0) + by) })],
  ['growing pain', each => ({ ...each, painGrowing: true })],
  ['vomiting', each => ({ ...each, vomiting: true })],
  ['worse sight', (each, by) => {
    const fallen = (from: number) => ({ logMar: Math.min(3, from + by / 2), entered: 'x' })
    if (!each.acuityUnaided && !each.acuityPinhole) return { ...each, acuityUnaided: fallen(1) }
    return { ...each, acuityUnaided: each.acuityUnaided && fallen(each.acuityUnaided.logMar), acuityPinhole: each.acuityPinhole && fallen(each.acuityPinhole.logMar) }
  }],
  // Worse is away from the usual 8 to 21: from a low pressure that is down, from a usual or high one up.
  ['higher pressure', (each, by) => each.iopMmHg !== undefined && each.iopMmHg < 8 ? each : { ...each, iopMmHg: Math.min(80, (each.iopMmHg ?? 21) + by * 2) }],
  ['lower pressure', (each, by) => each.iopMmHg !== undefined && each.iopMmHg >= 8 ? each : { ...each, iopMmHg: Math.max(0, (each.iopMmHg ?? 8) - by) }],
  ['limbus-to-limbus oedema', each => ({ ...each, oedemaLimbusToLimbus: true })],
  ['an infiltrate', each => ({ ...each, infiltrate: true })],
  ['a larger defect', (each, by) => ({ ...each, epithelialDefectMm: (each.epithelialDefectMm ?? 0) + by / 2 })],
  ['a leak without pressing', each => ({ ...each, seidel: 'spontaneous' })],
  ['a leak on pressing', each => each.seidel === 'spontaneous' ? each : { ...each, seidel: 'provoked' }],
  ['iris in the wound', each => ({ ...each, irisInWound: true })],
  ['a flatter chamber', (each, by) => ({ ...each, chamberDepth: worse(chamberDepths, each.chamberDepth, by) })],
  ['more cells', (each, by) => ({ ...each, cells: worse(cellGrades, each.cells, by) })],
  ['more flare', (each, by) => ({ ...each, flare: worse(flareGrades, each.flare, by) })],
  ['fibrin', each => ({ ...each, fibrin: true })],
  ['more hypopyon', (each, by) => ({ ...each, hypopyonMm: (each.hypopyonMm ?? 0) + by })],
  ['more blood', (each, by) => ({ ...each, hyphaema: worse(hyphaemaGrades, each.hyphaema, by) })],
  ['vitreous in the chamber', each => ({ ...each, vitreousInChamber: true })],
  ['vitreous cells', each => ({ ...each, vitreousCells: true })],
  ['a lens out of the bag', each => ({ ...each, lensPosition: 'out-of-bag' })],
  ['a lens that touches the cornea', each => ({ ...each, lensTouchesCornea: true })],
  ['a fragment further back', (each, by) => ({ ...each, lensFragment: worse(lensFragments, each.lensFragment, by) })],
  ['a lost red reflex', (each, by) => ({ ...each, redReflex: worse(redReflexes, each.redReflex, by) })],
  ['swollen lids', each => ({ ...each, lidSwelling: true })],
  ['floaters', each => ({ ...each, flashesOrFloaters: true })],
  ['a curtain', each => ({ ...each, curtainOrFieldLoss: true })],
  ['an allergy to drops', each => ({ ...each, dropsAllergy: true })],
]
const moreOedema = (each: ReviewFindings, by: number): ReviewFindings => ({ ...each, oedemaGrade: worse(oedemaGrades, each.oedemaGrade, by) })

describe('making a finding worse', () => {
  test.each(worsenings)('%s never lowers the urgency', (_name, worsen) => {
    fc.assert(fc.property(anyFindings, anyContext, fc.integer({ min: 1, max: 5 }), (findings, context, by) => {
      expect(rank(evaluateReview(worsen(findings, by), context).urgency)).toBeLessThanOrEqual(rank(evaluateReview(findings, context).urgency))
    }), { numRuns: 300 })
  })

  test('more oedema never lowers it either, but for vision.worse, which it explains in the first week', () => {
    fc.assert(fc.property(anyFindings, anyContext, fc.integer({ min: 1, max: 4 }), (findings, context, by) => {
      const without = (tried: ReviewFindings) => evaluateReview(tried, context).reasons.filter(reason => reason.ruleId !== 'vision.worse').map(reason => rank(reason.urgency))
      expect(Math.min(urgencies.length, ...without(moreOedema(findings, by)))).toBeLessThanOrEqual(Math.min(urgencies.length, ...without(findings)))
      if (context.daysAfterSurgery > 7) expect(rank(evaluateReview(moreOedema(findings, by), context).urgency)).toBeLessThanOrEqual(rank(evaluateReview(findings, context).urgency))
    }), { numRuns: 1000 })
  })

  test('a tightened limit never lowers the urgency', () => {
    const limits = escalationRules.flatMap(rule => Object.entries(rule.thresholds).map(([name, threshold]) => ({ ruleId: rule.id, name, ...threshold })))
    fc.assert(fc.property(anyFindings, anyContext, fc.array(fc.tuple(fc.constantFrom(...limits), fc.double({ min: 0, max: 1, noNaN: true })), { minLength: 1, maxLength: 4 }), (findings, context, tightened) => {
      const overrides = tightened.reduce((sum, [one, share]) => applyThresholds(sum, { [one.ruleId]: { [one.name]: one.safe[0] + share * (one.safe[1] - one.safe[0]) } }), {})
      expect(rank(evaluateReview(findings, context, overrides).urgency)).toBeLessThanOrEqual(rank(evaluateReview(findings, context).urgency))
    }), { numRuns: 1000 })
  })
})

describe('any partial sheet', () => {
  test('is answered, twice the same, without being changed', () => {
    fc.assert(fc.property(anyFindings, anyContext, (findings, context) => {
      const before = structuredClone({ findings, context })
      const first = evaluateReview(findings, context)
      expect(evaluateReview(findings, context)).toEqual(first)
      expect({ findings, context }).toEqual(before)
      expect(first.urgency).toBe(first.reasons[0]?.urgency ?? null)
      const ranks = first.reasons.map(reason => rank(reason.urgency))
      expect(ranks).toEqual([...ranks].sort((left, right) => left - right))
    }), { numRuns: 1000 })
  })

  test.each([Number.NaN, -1, 81, Number.POSITIVE_INFINITY])('a pressure of %s is not evaluated and is said to be unchecked', (iopMmHg) => {
    const outcome = evaluateReview({ ...quietFindings, iopMmHg }, dayOneContext)
    expect(outcome).toEqual({ reasons: [], urgency: null, unchecked: ['the pressure'] })
  })

  test('nothing recorded raises nothing and says that nothing was checked', () => {
    const { urgency, unchecked } = evaluateReview({}, { ...dayOneContext, preoperative: {} })
    expect(urgency).toBeNull()
    expect(unchecked).toEqual(['pain', 'sight', 'sight against before surgery', 'the pressure', 'corneal oedema', 'an infiltrate or an epithelial defect', 'the wound', 'the wound with fluorescein', 'iris in the wound', 'the depth of the chamber', 'cells', 'flare', 'fibrin or hypopyon', 'blood in the chamber', 'the vitreous', 'the position of the lens', 'a lens fragment', 'the red reflex', 'swollen lids', 'flashes, floaters or a curtain', 'the drops'])
  })

  test('what the pressure could not be weighed against is named once', () => {
    expect(evaluateReview({ ...quietFindings, iopMmHg: 30, painScore: undefined, vomiting: undefined }, { ...dayOneContext, preoperative: { bestLogMar: 0.5 } }).unchecked).toEqual(['pain', 'the rise since before surgery', 'vomiting'])
  })
})

describe('reasons', () => {
  test('carry the findings that fired them, and no others', () => {
    const { reasons } = evaluateReview({ ...quietFindings, seidel: 'spontaneous', woundClockHour: 10, iopMmHg: 5, chamberDepth: 'shallow' }, dayOneContext)
    expect(reasons.map(reason => [reason.ruleId, reason.urgency])).toEqual([['wound.leak', 'now'], ['pressure.low', 'now'], ['chamber.shallow', 'today']])
    expect(reasons[0]).toEqual({ ruleId: 'wound.leak', ruleVersion: 1, urgency: 'now', sentence: 'Wound leaking at 10 o’clock with shallow chamber, pressure 5 mmHg.', source: 'proposed on cited signs', findings: { wound: 'sealed', seidel: 'spontaneous', woundClockHour: 10, chamberDepth: 'shallow', iopMmHg: 5, irisInWound: false } })
  })

  test('a cluster and an unexplained lens also go to the clinical lead', () => {
    const { reasons } = evaluateReview({ ...quietFindings, fibrin: true, hypopyonMm: 1 }, { ...dayOneContext, otherSuspectedOnList: 1, lensAsPlanned: false })
    expect(reasons.filter(reason => reason.alsoTell === 'clinical-lead').map(reason => reason.ruleId)).toEqual(['list.cluster', 'lens.not-as-planned'])
    expect(reasons.find(reason => reason.ruleId === 'list.cluster')).toMatchObject({ sentence: 'A second suspected infection or toxic reaction from one list.', findings: { otherSuspectedOnList: 1, otherSuspectedAtSiteThisWeek: 0 } })
  })

  test('a site that suspects infection earlier also counts a cluster earlier', () => {
    const context = { ...dayOneContext, otherSuspectedOnList: 1 }
    expect(evaluateReview({ ...quietFindings, lidSwelling: true }, context).urgency).toBeNull()
    expect(evaluateReview({ ...quietFindings, lidSwelling: true }, context, { 'infection.suspected': { signs: 1 } }).reasons.map(reason => reason.ruleId)).toEqual(['infection.suspected', 'list.cluster'])
  })
})

describe('what would make it more urgent', () => {
  test('names the nearest step of each finding for an eye at risk with 34 mmHg', () => {
    const findings: ReviewFindings = { ...quietFindings, iopMmHg: 34, oedemaGrade: 1, painScore: 1 }
    const context: ReviewContext = { ...dayOneContext, riskReasons: ['glaucoma'], preoperative: { bestLogMar: 0.5, iopMmHg: 25 } }
    expect(evaluateReview(findings, context).urgency).toBe('today')
    expect(wouldBecome(findings, context)).toEqual([{ urgency: 'now', sentence: 'oedema 2, pain 4 or more, or 35 mmHg' }])
  })

  test('names what each urgency would need for a quiet eye, whose 25 mmHg is a rise of 10 and counts one row higher', () => {
    expect(wouldBecome(quietFindings, dayOneContext)).toEqual([
      { urgency: 'now', sentence: 'flare 4+ or hypopyon' },
      { urgency: 'today', sentence: 'oedema 3, pain 4 or more, or 25 mmHg' },
      { urgency: 'this-week', sentence: 'a leak on pressing' },
    ])
  })

  test('names nothing when it is already now', () => {
    expect(wouldBecome({ ...quietFindings, hypopyonMm: 1 }, dayOneContext)).toEqual([])
  })

  test('each thing it names does what it says', () => {
    fc.assert(fc.property(anyFindings, anyContext, (findings, context) => {
      const current = rank(evaluateReview(findings, context).urgency)
      for (const { urgency, sentence } of wouldBecome(findings, context)) {
        expect(rank(urgency)).toBeLessThan(current)
        const pain = /pain (\d+)/.exec(sentence)
        if (pain) expect(evaluateReview({ ...findings, painScore: Number(pain[1]) }, context).urgency).toBe(urgency)
        const pressure = /(\d+) mmHg/.exec(sentence)
        if (pressure) expect(evaluateReview({ ...findings, iopMmHg: Number(pressure[1]) }, context).urgency).toBe(urgency)
      }
    }), { numRuns: 200 })
  })
})

describe('what a sheet needs before it is signed', () => {
  test.each(visitKinds)('a complete %s sheet misses nothing', (kind) => {
    expect(missingRequiredFindings(quietFindings, kind)).toEqual([])
  })

  test.each([
    ['day-one', ['painScore', 'acuityUnaided', 'iopMmHg', 'oedemaGrade', 'cells', 'flare', 'chamberDepth', 'wound', 'lensPosition']],
    ['first-week', ['painScore', 'acuityUnaided', 'iopMmHg', 'oedemaGrade', 'cells', 'flare', 'wound', 'lensPosition']],
    ['final', ['painScore', 'acuityUnaided', 'iopMmHg', 'oedemaGrade', 'cells', 'flare', 'lensPosition']],
    ['unplanned', ['painScore', 'acuityUnaided', 'oedemaGrade', 'cells', 'flare', 'chamberDepth', 'wound', 'lensPosition']],
  ] as const)('an empty %s sheet misses %j', (kind, fields) => {
    expect(missingRequiredFindings({}, kind).map(each => each.field)).toEqual(fields)
  })

  test('0 is a recorded value', () => {
    expect(missingRequiredFindings({ ...quietFindings, ...sees(0), painScore: 0, iopMmHg: 0, oedemaGrade: 0, cells: '0', flare: '0' }, 'day-one')).toEqual([])
  })
})
