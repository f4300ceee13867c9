import { Temporal } from 'temporal-polyfill'
import { DomainError } from '#shared/domain/errors'
import type { KnownFacts } from '#shared/domain/pathway/facts'
import { actionRules, closingEffects, pathwayActionKinds, transitions } from '#shared/domain/pathway/transitions'
import type { PathwayActionKind, PathwayEffect, Transition } from '#shared/domain/pathway/transitions'
import type { CloseReason, PathwayState, Stage } from '#shared/domain/pathway/vocabulary'

/** Where a pathway stands. `holdReason` and `lookAgainOn` belong to `held`, `closeReason` to `closed`. */
export interface PathwayStanding {
  stage: Stage
  state: PathwayState
  holdReason: string | null
  /** YYYY-MM-DD at the site. */
  lookAgainOn: string | null
  closeReason: CloseReason | null
}

export type PathwayAction =
  | { kind: 'advance', to?: Stage }
  /** `today` is the site's date, YYYY-MM-DD. */
  | { kind: 'hold', reason: string, lookAgainOn: string, today: string }
  | { kind: 'release' }
  /** `words` end the open escalations; needed unless there are none. */
  | { kind: 'close', reason: CloseReason, words?: string }
  | { kind: 'reopen', reason: string }

export interface MissingRequirement { id: string, sentence: string }

export interface PathwayDecision {
  next: PathwayStanding
  action: PathwayActionKind
  fromStage: Stage
  toStage: Stage
  /** The reason or words to keep with the event, trimmed; empty when the action has none. */
  words: string
  effects: readonly PathwayEffect[]
}

/** A hold is looked at again within a year. 'proposed': it catches a mistyped year. */
export const longestHoldDays = 366

const stageNames: Readonly<Record<Stage, string>> = { 'referral': 'referral', 'biometry': 'biometry', 'surgery': 'surgery', 'day-one': 'day one', 'follow-up': 'follow-up', 'discharge': 'discharge' }

/** The move that leaves a stage by going on or by reopening; undefined when there is none. */
export function transitionFrom(from: Stage, by: Transition['by']): Transition | undefined {
  return transitions.find(each => each.from === from && each.by === by)
}

/**
 * What is missing before a pathway may move, in plain words, in the table's order. The page and the server ask this same function.
 * @throws DomainError `pathway.transition-not-allowed` when the table has no such move.
 */
export function missingFor(facts: KnownFacts, from: Stage, to: Stage): MissingRequirement[] {
  const transition = transitions.find(each => each.from === from && each.to === to)
  if (!transition) throw notAllowed(`A pathway does not go from ${stageNames[from]} to ${stageNames[to]}.`)
  return transition.requirements.filter(each => !each.isMet(facts)).map(({ id, sentence }) => ({ id, sentence }))
}

/** The actions that a page may offer for a pathway as it stands; requirements are asked with `missingFor`. */
export function actionsFor(pathway: Pick<PathwayStanding, 'stage' | 'state'>): PathwayActionKind[] {
  return pathwayActionKinds.filter(kind => actionRules[kind].states.includes(pathway.state) && actionRules[kind].stages.includes(pathway.stage))
}

/**
 * Decides one action on one pathway and says what it causes. Changes nothing itself.
 * @throws DomainError `pathway.closed`, `pathway.held`, `pathway.transition-not-allowed`, `pathway.requirements-unmet`
 * (`detail.missing` lists id and sentence of each) or `pathway.invalid` (`fields` names what to correct).
 */
export function decideTransition(pathway: PathwayStanding, action: PathwayAction, facts: KnownFacts): PathwayDecision {
  assertMayAct(pathway, action.kind)
  switch (action.kind) {
    case 'advance': return moved(pathway, transitionFrom(pathway.stage, 'advance'), action.to, facts, '')
    case 'reopen': return moved(pathway, transitionFrom(pathway.stage, 'reopen'), undefined, facts, said(action.reason, 'reason', 'Say why the pathway is opened again.'))
    case 'hold': return held(pathway, action)
    case 'release': return { next: standing(pathway.stage), action: 'release', fromStage: pathway.stage, toStage: pathway.stage, words: '', effects: [] }
    case 'close': return closed(pathway, action, facts)
  }
}

function assertMayAct(pathway: PathwayStanding, kind: PathwayActionKind): void {
  const rule = actionRules[kind]
  if (rule.states.includes(pathway.state) && rule.stages.includes(pathway.stage)) return
  if (pathway.state === 'closed') throw new DomainError('pathway.closed', 'This pathway is closed. A new referral starts a new one.', { detail: { closeReason: pathway.closeReason } })
  if (pathway.state === 'held' && !rule.states.includes('held')) {
    throw new DomainError('pathway.held', 'This pathway is on hold. Release it first.', { detail: { holdReason: pathway.holdReason, lookAgainOn: pathway.lookAgainOn } })
  }
  throw notAllowed(kind === 'release' ? 'This pathway is not on hold.' : `A pathway at ${stageNames[pathway.stage]} cannot ${kind === 'advance' ? 'go on' : `be ${kind === 'hold' ? 'held' : 'reopened'}`}.`)
}

function moved(pathway: PathwayStanding, transition: Transition | undefined, wanted: Stage | undefined, facts: KnownFacts, words: string): PathwayDecision {
  if (!transition || (wanted !== undefined && wanted !== transition.to)) {
    throw notAllowed(`A pathway does not go from ${stageNames[pathway.stage]} to ${wanted ? stageNames[wanted] : 'another stage'}.`)
  }
  const missing = missingFor(facts, transition.from, transition.to)
  if (missing.length > 0) {
    throw new DomainError('pathway.requirements-unmet', missing.map(each => each.sentence).join(' '), { detail: { from: transition.from, to: transition.to, missing } })
  }
  return { next: standing(transition.to), action: transition.by, fromStage: transition.from, toStage: transition.to, words, effects: transition.effects }
}

function held(pathway: PathwayStanding, action: Extract<PathwayAction, { kind: 'hold' }>): PathwayDecision {
  const reason = said(action.reason, 'reason', 'Say why the pathway waits.')
  const lookAgainOn = dateIn(action.lookAgainOn)
  const today = Temporal.PlainDate.from(action.today)
  const days = lookAgainOn ? today.until(lookAgainOn, { largestUnit: 'days' }).days : 0
  if (!lookAgainOn || days < 1 || days > longestHoldDays) {
    const message = 'Give a date to look again, from tomorrow to a year from now.'
    throw new DomainError('pathway.invalid', message, { fields: [{ field: 'lookAgainOn', code: 'out-of-range', message, limit: `1 to ${longestHoldDays} days from today` }] })
  }
  const next: PathwayStanding = { ...standing(pathway.stage), state: 'held', holdReason: reason, lookAgainOn: lookAgainOn.toString() }
  return { next, action: 'hold', fromStage: pathway.stage, toStage: pathway.stage, words: reason, effects: [] }
}

function closed(pathway: PathwayStanding, action: Extract<PathwayAction, { kind: 'close' }>, facts: KnownFacts): PathwayDecision {
  const words = facts.openEscalations === 0 ? (action.words ?? '').trim() : said(action.words ?? '', 'words', 'Say in a word how the open escalations end.')
  const next: PathwayStanding = { ...standing(pathway.stage), state: 'closed', closeReason: action.reason }
  return { next, action: 'close', fromStage: pathway.stage, toStage: pathway.stage, words, effects: closingEffects[action.reason] }
}

function standing(stage: Stage): PathwayStanding {
  return { stage, state: 'open', holdReason: null, lookAgainOn: null, closeReason: null }
}

function said(words: string, field: string, message: string): string {
  const trimmed = words.trim()
  if (trimmed === '') throw new DomainError('pathway.invalid', message, { fields: [{ field, code: 'required', message }] })
  return trimmed
}

function dateIn(text: string): Temporal.PlainDate | undefined {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return undefined
  try {
    return Temporal.PlainDate.from(text, { overflow: 'reject' })
  }
  catch {
    // A date such as 30 February is a slip of the person who typed it; the caller answers with the field.
    return undefined
  }
}

function notAllowed(message: string): DomainError {
  return new DomainError('pathway.transition-not-allowed', message)
}
