import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import type { pathways } from '#server/db/schema/index'
import { mayAnswer } from '#server/policies/escalation'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { applyEffects } from '#server/services/pathway/apply-effects'
import { factsOf, loadRecords } from '#server/services/pathway/load-facts'
import { lockPathway } from '#server/services/pathway/load-pathway'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import type { AuditEvent } from '#shared/domain/audit/events'
import { DomainError } from '#shared/domain/errors'
import { decideTransition } from '#shared/domain/pathway/decide'
import type { PathwayAction, PathwayDecision } from '#shared/domain/pathway/decide'
import type { PathwayActionKind } from '#shared/domain/pathway/transitions'
import type { CloseReason, Stage } from '#shared/domain/pathway/vocabulary'
import { dayBounds } from '#shared/domain/visit/site-day'

/** What a caller asks for. The site's own date is added here, where the site is known. */
export type AskedAction = Exclude<PathwayAction, { kind: 'hold' }> | { kind: 'hold', reason: string, lookAgainOn: string }
export interface ChangeInput { pathwayId: string, rowVersion: number, action: AskedAction }

interface ActionWords { event: AuditEvent, eventKind: string, refusal: string }
const actionWords: Readonly<Record<PathwayActionKind, ActionWords>> = {
  advance: { event: 'pathway.advanced', eventKind: 'advanced', refusal: 'The team of this site moves a pathway on.' },
  hold: { event: 'pathway.held', eventKind: 'held', refusal: 'A coordinator, nurse or surgeon of this site puts a pathway on hold.' },
  release: { event: 'pathway.released', eventKind: 'released', refusal: 'A coordinator, nurse or surgeon of this site releases a pathway.' },
  close: { event: 'pathway.closed', eventKind: 'closed', refusal: 'A coordinator or surgeon of this site closes a pathway.' },
  reopen: { event: 'pathway.reopened', eventKind: 'reopened', refusal: 'A surgeon of this site opens a discharged pathway again.' },
}
const closeWords: Readonly<Record<CloseReason, string>> = { 'declined': 'declined', 'not-suitable': 'not suitable', 'moved-away': 'moved away', 'died': 'the patient has died', 'entered-in-error': 'entered in error' }
const stageWords: Readonly<Record<Stage, string>> = { 'referral': 'Referral', 'biometry': 'Biometry', 'surgery': 'Surgery', 'day-one': 'Day one', 'follow-up': 'Follow-up', 'discharge': 'Discharge' }

/** The one door through which a pathway moves, waits, ends or opens again. */
export async function changePathway(ctx: ServiceContext, input: ChangeInput) {
  try {
    const changed = await ctx.db.transaction(async (tx) => {
      const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: input.action.kind, refusal: actionWords[input.action.kind].refusal, rowVersion: input.rowVersion })
      return changeLocked(tx, ctx, loaded, input.action)
    })
    await Promise.all([notifyLive(ctx.db, 'pathway', changed.siteId, [changed.id]), input.action.kind === 'close' ? notifyLive(ctx.db, 'escalation', changed.siteId, [changed.id]) : undefined, input.action.kind === 'close' ? notifyLive(ctx.db, 'visit', changed.siteId, [changed.id]) : undefined])
    return changed
  }
  catch (error) {
    if (refusedConstraint(error) === 'pathways_one_open_per_eye') throw new DomainError('pathway.already-open', 'Another pathway of this eye was opened meanwhile.')
    throw error
  }
}

/** The same on a pathway that the caller has locked and may change, inside a larger act such as a declined referral. */
export async function changeLocked(tx: Transaction, ctx: ServiceContext, loaded: LoadedPathway, asked: AskedAction) {
  const action: PathwayAction = asked.kind === 'hold' ? { ...asked, today: dayBounds(loaded.site.zone, ctx.now).date } : asked
  const records = await loadRecords(tx, loaded)
  const decision = decideTransition(loaded.pathway, action, factsOf(loaded, records))
  if (decision.effects.includes('closeEscalations') && records.escalations.some(each => !mayAnswer(ctx.actor, each))) {
    throw new DomainError('pathway.not-allowed', 'An escalation of this eye is open, and a surgeon closes escalations. Ask one to close the pathway.')
  }
  const words = sentenceFor(decision)
  await applyEffects(tx, ctx, decision.effects, { loaded, words })
  return recordEvent(tx, ctx, loaded, { kind: actionWords[action.kind].eventKind, words, audit: actionWords[action.kind].event, payload: { from: decision.fromStage, to: decision.toStage }, detail: decision.next.closeReason ? { closeReason: decision.next.closeReason } : {}, change: { ...decision.next, ...timesFor(decision, loaded, ctx.now) } })
}

function sentenceFor({ action, fromStage, toStage, words, next }: PathwayDecision): string {
  if (action === 'advance') return `${stageWords[fromStage]} done, now ${stageWords[toStage].toLowerCase()}`
  if (action === 'release') return 'Hold released'
  if (action === 'hold') return `On hold until ${next.lookAgainOn}: ${words}`
  if (action === 'reopen') return `Opened again: ${words}`
  return `Closed: ${closeWords[next.closeReason ?? 'entered-in-error']}${words ? `. ${words}` : ''}`
}

/** The instants that a move leaves on the pathway, which the horizon draws. A stage that was reached before keeps its first instant. */
function timesFor({ fromStage, toStage, action }: PathwayDecision, { pathway }: LoadedPathway, now: Date): Partial<typeof pathways.$inferInsert> {
  if (fromStage === toStage) return {}
  if (action === 'reopen') return { stageSince: now, dischargedAt: null }
  return {
    stageSince: now,
    ...(toStage === 'follow-up' ? { dayOneAt: pathway.dayOneAt ?? now } : {}),
    ...(toStage === 'discharge' ? { followUpAt: pathway.followUpAt ?? now, dischargedAt: now } : {}),
  }
}
