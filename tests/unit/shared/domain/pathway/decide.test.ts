import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { DomainError } from '#shared/domain/errors'
import { actionsFor, decideTransition, missingFor } from '#shared/domain/pathway/decide'
import type { PathwayAction, PathwayStanding } from '#shared/domain/pathway/decide'
import type { KnownFacts, PathwayFacts } from '#shared/domain/pathway/facts'
import { actionRules, closingEffects, pathwayEffects, transitions } from '#shared/domain/pathway/transitions'
import { closeReasons, pathwayStates, stages } from '#shared/domain/pathway/vocabulary'
import type { Stage } from '#shared/domain/pathway/vocabulary'

const everythingDone: PathwayFacts = {
  triageAccepted: true, eyeStated: true, contactRouteRecorded: true, messageConsentRecorded: true, redFlagsAnswered: true,
  biometryAccepted: true, plausibilityWarningsOpen: 0, lensPlanSigned: true, secondCheckSettled: true, riskAssessed: true, consentRecorded: true, onTheatreList: true,
  operationNoteSigned: true, lensAsPlanned: true, lensDeviationExplained: false, dropsPrescribed: true, dayOneBooked: true, otherFirstCheckDecided: false,
  dayOneReviewSigned: true, otherFirstCheckRecorded: false, unacknowledgedUrgentEscalations: 0, nextVisitBooked: true,
  finalRefractionRecorded: true, finalAcuityRecorded: true, openEscalations: 0, fellowEyeDecisionRecorded: true, dischargeLetterSent: true, otherOpenPathwayOfEye: false,
}
const at = (stage: Stage, over: Partial<PathwayStanding> = {}): PathwayStanding => ({ stage, state: 'open', holdReason: null, lookAgainOn: null, closeReason: null, ...over })
const heldAt = (stage: Stage) => at(stage, { state: 'held', holdReason: 'Chest infection', lookAgainOn: '2026-04-10' })
const closedAt = (stage: Stage) => at(stage, { state: 'closed', closeReason: 'declined' })
const hold: PathwayAction = { kind: 'hold', reason: 'Chest infection', lookAgainOn: '2026-04-10', today: '2026-03-27' }

function refusal(work: () => unknown): DomainError {
  try {
    work()
  }
  catch (error) {
    if (error instanceof DomainError) return error
    throw error
  }
  throw new Error('nothing was refused')
}

/** One row for each requirement: the fact that breaks it, alone. Each is a line of the stage table of the product. */
const broken: [Stage, Stage, string, KnownFacts][] = [
  ['referral', 'biometry', 'triage-accepted', { triageAccepted: false }],
  ['referral', 'biometry', 'eye-stated', { eyeStated: false }],
  ['referral', 'biometry', 'contact-route', { contactRouteRecorded: false }],
  ['referral', 'biometry', 'message-consent', { messageConsentRecorded: false }],
  ['referral', 'biometry', 'red-flags', { redFlagsAnswered: false }],
  ['biometry', 'surgery', 'biometry-accepted', { biometryAccepted: false }],
  ['biometry', 'surgery', 'biometry-warnings', { plausibilityWarningsOpen: 1 }],
  ['biometry', 'surgery', 'lens-plan', { lensPlanSigned: false }],
  ['biometry', 'surgery', 'second-check', { secondCheckSettled: false }],
  ['biometry', 'surgery', 'risk', { riskAssessed: false }],
  ['biometry', 'surgery', 'consent', { consentRecorded: false }],
  ['biometry', 'surgery', 'theatre-list', { onTheatreList: false }],
  ['surgery', 'day-one', 'operation-note', { operationNoteSigned: false }],
  ['surgery', 'day-one', 'lens-implanted', { lensAsPlanned: false }],
  ['surgery', 'day-one', 'drops', { dropsPrescribed: false }],
  ['surgery', 'day-one', 'first-check', { dayOneBooked: false }],
  ['day-one', 'follow-up', 'day-one-review', { dayOneReviewSigned: false }],
  ['day-one', 'follow-up', 'urgent-escalations', { unacknowledgedUrgentEscalations: 1 }],
  ['day-one', 'follow-up', 'next-visit', { nextVisitBooked: false }],
  ['follow-up', 'discharge', 'final-refraction', { finalRefractionRecorded: false }],
  ['follow-up', 'discharge', 'final-acuity', { finalAcuityRecorded: false }],
  ['follow-up', 'discharge', 'open-escalations', { openEscalations: 1 }],
  ['follow-up', 'discharge', 'fellow-eye', { fellowEyeDecisionRecorded: false }],
  ['follow-up', 'discharge', 'discharge-letter', { dischargeLetterSent: false }],
  ['discharge', 'follow-up', 'only-open-pathway', { otherOpenPathwayOfEye: true }],
]

describe('what each stage needs', () => {
  test.each(broken)('from %s to %s, %s is the one thing missing with %j', (from, to, id, change) => {
    expect(missingFor({ ...everythingDone, ...change }, from, to).map(each => each.id)).toEqual([id])
  })

  test.each(broken)('from %s to %s, %s is missing when its fact was never loaded', (from, to, id, change) => {
    const unknown: KnownFacts = { ...everythingDone }
    for (const name of Object.keys(change)) Reflect.deleteProperty(unknown, name)
    expect(missingFor(unknown, from, to).map(each => each.id)).toContain(id)
  })

  test('every requirement of the table has its row', () => {
    expect(broken.map(([from, to, id]) => `${from}>${to}:${id}`).sort()).toEqual(transitions.flatMap(each => each.requirements.map(one => `${each.from}>${each.to}:${one.id}`)).sort())
  })

  test.each(transitions.map(each => [each.from, each.to] as const))('from %s to %s nothing is missing when everything is done, and all of it when nothing is known', (from, to) => {
    expect(missingFor(everythingDone, from, to)).toEqual([])
    expect(missingFor({}, from, to)).toHaveLength(transitions.find(each => each.from === from && each.to === to)!.requirements.length)
  })

  test('an explained deviation stands for the planned lens, and another first check for the day-one visit and its review', () => {
    expect(missingFor({ ...everythingDone, lensAsPlanned: false, lensDeviationExplained: true, dayOneBooked: false, otherFirstCheckDecided: true }, 'surgery', 'day-one')).toEqual([])
    const byTelephone: KnownFacts = { ...everythingDone, dayOneReviewSigned: false, otherFirstCheckDecided: true }
    expect(missingFor(byTelephone, 'day-one', 'follow-up').map(each => each.id)).toEqual(['day-one-review'])
    expect(missingFor({ ...byTelephone, otherFirstCheckRecorded: true }, 'day-one', 'follow-up')).toEqual([])
    expect(missingFor({ ...byTelephone, otherFirstCheckDecided: false, otherFirstCheckRecorded: true }, 'day-one', 'follow-up').map(each => each.id)).toEqual(['day-one-review'])
  })

  test('a refusal carries each missing thing in the words that the page shows', () => {
    const error = refusal(() => decideTransition(at('surgery'), { kind: 'advance' }, { ...everythingDone, dropsPrescribed: false, dayOneBooked: false }))
    expect(error.code).toBe('pathway.requirements-unmet')
    expect(error.detail).toEqual({
      from: 'surgery', to: 'day-one',
      missing: [
        { id: 'drops', sentence: 'Drops after surgery are not prescribed.' },
        { id: 'first-check', sentence: 'No day-one visit is booked, and no other first check is decided.' },
      ],
    })
  })
})

describe('moving', () => {
  test.each(stages.flatMap(from => stages.map(to => [from, to] as const)))('going on from %s to %s follows the table', (from, to) => {
    const isThere = transitions.some(each => each.by === 'advance' && each.from === from && each.to === to)
    if (isThere) expect(decideTransition(at(from), { kind: 'advance', to }, everythingDone)).toMatchObject({ next: at(to), fromStage: from, toStage: to, action: 'advance' })
    else expect(refusal(() => decideTransition(at(from), { kind: 'advance', to }, everythingDone)).code).toBe('pathway.transition-not-allowed')
  })

  test('discharge leads back to follow-up only by a reopening with a reason', () => {
    expect(decideTransition(at('discharge'), { kind: 'reopen', reason: ' Blurred again ' }, everythingDone)).toMatchObject({ next: at('follow-up'), words: 'Blurred again', effects: [] })
    expect(refusal(() => decideTransition(at('discharge'), { kind: 'reopen', reason: '  ' }, everythingDone))).toMatchObject({ code: 'pathway.invalid', fields: [{ field: 'reason', code: 'required' }] })
    expect(refusal(() => decideTransition(at('follow-up'), { kind: 'reopen', reason: 'Blurred again' }, everythingDone)).code).toBe('pathway.transition-not-allowed')
    expect(refusal(() => decideTransition(at('discharge'), { kind: 'reopen', reason: 'Blurred again' }, { otherOpenPathwayOfEye: true })).code).toBe('pathway.requirements-unmet')
  })

  test('a discharge withdraws the safety texts still queued', () => {
    expect(decideTransition(at('follow-up'), { kind: 'advance' }, everythingDone).effects).toEqual(['withdrawSafetyNet'])
  })
})

describe('holding', () => {
  test('a hold keeps the stage, its reason and the date to look again; a release clears them', () => {
    const held = decideTransition(at('biometry'), hold, {}).next
    expect(held).toEqual({ stage: 'biometry', state: 'held', holdReason: 'Chest infection', lookAgainOn: '2026-04-10', closeReason: null })
    expect(decideTransition(held, { kind: 'release' }, {}).next).toEqual(at('biometry'))
  })

  test('a held pathway may be given another reason and date', () => {
    expect(decideTransition(heldAt('surgery'), { ...hold, reason: 'Still coughing', lookAgainOn: '2026-04-24' }, {}).next).toMatchObject({ state: 'held', holdReason: 'Still coughing', lookAgainOn: '2026-04-24' })
  })

  test.each(['2026-03-28', '2027-03-28'])('the date to look again may be %s when today is 27 March 2026', (lookAgainOn) => {
    expect(decideTransition(at('referral'), { ...hold, lookAgainOn }, {}).next.lookAgainOn).toBe(lookAgainOn)
  })

  test.each(['2026-03-27', '2026-03-26', '2027-03-29', '2026-04-31', '10 April', ''])('the date to look again may not be "%s" when today is 27 March 2026', (lookAgainOn) => {
    expect(refusal(() => decideTransition(at('referral'), { ...hold, lookAgainOn }, {}))).toMatchObject({ code: 'pathway.invalid', fields: [{ field: 'lookAgainOn', code: 'out-of-range' }] })
  })

  test('a hold needs a reason, a discharged pathway is not held, and one that is not held is not released', () => {
    expect(refusal(() => decideTransition(at('referral'), { ...hold, reason: ' ' }, {}))).toMatchObject({ code: 'pathway.invalid', fields: [{ field: 'reason' }] })
    expect(refusal(() => decideTransition(at('discharge'), hold, {})).code).toBe('pathway.transition-not-allowed')
    expect(refusal(() => decideTransition(at('referral'), { kind: 'release' }, {})).code).toBe('pathway.transition-not-allowed')
  })

  test.each(stages.filter(stage => stage !== 'discharge'))('held at %s it does not go on, whatever is done', (stage) => {
    expect(refusal(() => decideTransition(heldAt(stage), { kind: 'advance' }, everythingDone))).toMatchObject({ code: 'pathway.held', detail: { holdReason: 'Chest infection', lookAgainOn: '2026-04-10' } })
  })
})

describe('closing', () => {
  test.each(stages.flatMap(stage => closeReasons.map(reason => [stage, reason] as const)))('at %s it closes as %s with everything that is still planned', (stage, reason) => {
    const decision = decideTransition(at(stage), { kind: 'close', reason }, { openEscalations: 0 })
    expect(decision.next).toEqual(at(stage, { state: 'closed', closeReason: reason }))
    expect(decision.effects).toEqual(expect.arrayContaining(['cancelFutureVisits', 'withdrawMessages', 'closeEscalations', 'removeFromTheatreList']))
    expect(decision.effects.includes('stopMessagesToPatient')).toBe(reason === 'died')
  })

  test('open or unknown escalations are closed with a word, or not at all', () => {
    for (const facts of [{ openEscalations: 1 }, {}]) {
      expect(refusal(() => decideTransition(at('day-one'), { kind: 'close', reason: 'moved-away' }, facts))).toMatchObject({ code: 'pathway.invalid', fields: [{ field: 'words', code: 'required' }] })
      expect(decideTransition(at('day-one'), { kind: 'close', reason: 'moved-away', words: ' Handed to their new unit ' }, facts).words).toBe('Handed to their new unit')
    }
  })

  test('a held pathway closes and keeps no hold', () => {
    expect(decideTransition(heldAt('referral'), { kind: 'close', reason: 'declined' }, { openEscalations: 0 }).next).toEqual(closedAt('referral'))
  })

  test.each(stages)('closed at %s it answers nothing any more', (stage) => {
    const actions: PathwayAction[] = [{ kind: 'advance' }, hold, { kind: 'release' }, { kind: 'close', reason: 'died', words: 'x' }, { kind: 'reopen', reason: 'x' }]
    for (const action of actions) expect(refusal(() => decideTransition(closedAt(stage), action, everythingDone))).toMatchObject({ code: 'pathway.closed', detail: { closeReason: 'declined' } })
    expect(actionsFor(closedAt(stage))).toEqual([])
  })

  test('every effect is caused by something', () => {
    expect(new Set([...transitions.flatMap(each => each.effects), ...Object.values(closingEffects).flat()])).toEqual(new Set(pathwayEffects))
  })
})

const anyFacts = fc.record(Object.fromEntries(Object.entries(everythingDone).map(([name, value]) => [name, typeof value === 'number' ? fc.constantFrom(0, 1) : fc.boolean()])), { requiredKeys: [] }) as fc.Arbitrary<KnownFacts>
const anyAction: fc.Arbitrary<PathwayAction> = fc.oneof(
  fc.record({ kind: fc.constant('advance' as const), to: fc.constantFrom(...stages) }, { requiredKeys: ['kind'] }),
  fc.constant<PathwayAction>({ kind: 'advance' }),
  fc.constant(hold), fc.constant<PathwayAction>({ kind: 'release' }),
  fc.record({ kind: fc.constant('close' as const), reason: fc.constantFrom(...closeReasons), words: fc.string() }),
  fc.record({ kind: fc.constant('reopen' as const), reason: fc.string() }),
)
const attempt = (pathway: PathwayStanding, action: PathwayAction, facts: KnownFacts) => {
  try {
    return decideTransition(pathway, action, facts)
  }
  catch (error) {
    if (error instanceof DomainError) return error
    throw error
  }
}

describe('any sequence of actions', () => {
  test('moves only along the table, never while held or closed, and refuses with a code of the pathway', () => {
    fc.assert(fc.property(fc.array(fc.tuple(anyAction, fc.oneof(anyFacts, fc.constant(everythingDone))), { maxLength: 40 }), (steps) => {
      let pathway = at('referral')
      for (const [action, facts] of steps) {
        const answer = attempt(pathway, action, facts)
        if (answer instanceof DomainError) {
          expect(answer.code).toMatch(/^pathway\.(closed|held|transition-not-allowed|requirements-unmet|invalid)$/)
          continue
        }
        const { next } = answer
        if (next.stage !== pathway.stage) {
          const transition = transitions.find(each => each.from === pathway.stage && each.to === next.stage)
          expect(transition?.requirements.every(each => each.isMet(facts))).toBe(true)
          expect(pathway.state).toBe('open')
        }
        expect(pathway.state).not.toBe('closed')
        expect(next.state === 'held').toBe(next.holdReason !== null && next.lookAgainOn !== null)
        expect(next.state === 'closed').toBe(next.closeReason !== null)
        pathway = next
      }
    }), { numRuns: 500 })
  })

  test('what the page is told it may offer is exactly what is not refused outright', () => {
    const probes: PathwayAction[] = [{ kind: 'advance' }, hold, { kind: 'release' }, { kind: 'close', reason: 'declined' }, { kind: 'reopen', reason: 'x' }]
    for (const stage of stages) for (const pathway of [at(stage), heldAt(stage), closedAt(stage)]) {
      const taken = probes.filter(action => !(attempt(pathway, action, everythingDone) instanceof DomainError)).map(action => action.kind)
      expect(taken).toEqual(actionsFor(pathway))
    }
  })

  test('reaches every stage, open and closed, and every stage but discharge held', () => {
    const seen = new Set<string>()
    const queue = [at('referral')]
    const actions: PathwayAction[] = [{ kind: 'advance' }, hold, { kind: 'release' }, { kind: 'close', reason: 'declined' }, { kind: 'reopen', reason: 'Blurred again' }]
    for (let pathway = queue.shift(); pathway; pathway = queue.shift()) {
      if (seen.has(`${pathway.stage} ${pathway.state}`)) continue
      seen.add(`${pathway.stage} ${pathway.state}`)
      for (const action of actions) {
        const answer = attempt(pathway, action, everythingDone)
        if (!(answer instanceof DomainError)) queue.push(answer.next)
      }
    }
    expect([...seen].sort()).toEqual(stages.flatMap(stage => pathwayStates.map(state => `${stage} ${state}`)).filter(each => each !== 'discharge held').sort())
  })

  test('no action rule names a stage that cannot be', () => {
    for (const rule of Object.values(actionRules)) for (const stage of rule.stages) expect(stages).toContain(stage)
  })
})
