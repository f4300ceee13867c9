import { missingPatientReason } from '#shared/domain/escalation/rules'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import type { VisitKind } from '#shared/domain/review/vocabulary'
import type { VisitState } from '#shared/domain/visit/vocabulary'

export const missingStepNames = ['call', 'text', 'second-call', 'found', 'not-found'] as const
export type MissingStepName = typeof missingStepNames[number]
type PlannedStep = Exclude<MissingStepName, 'found'>

/** The steps in their order, by minutes after the booked time. 20 is the product's; the others 'proposed'. */
export const missingStepPlan: readonly { step: PlannedStep, minutesLate: number, words: string }[] = [
  { step: 'call', minutesLate: 20, words: 'Ring the patient.' },
  { step: 'text', minutesLate: 25, words: 'Send a text.' },
  { step: 'second-call', minutesLate: 35, words: 'Ring again, and the carer if there is one.' },
  { step: 'not-found', minutesLate: 45, words: 'Not found: end the steps.' },
]

export interface MissingProgress {
  /** Late enough that the steps have begun, and not found yet. */
  isMissing: boolean
  /** Whole minutes after the booked time; 0 when it has not come. */
  minutesLate: number
  done: MissingStepName[]
  next: { step: PlannedStep, words: string, dueAt: Date, isDue: boolean } | null
  end: 'found' | 'not-found' | null
  /** What ending without finding a day-one patient raises, once. Others are rebooked by the nurse. */
  raises: EscalationReason | null
}

const minuteMs = 60_000
const waiting: readonly VisitState[] = ['booked', 'missing']

/**
 * Where the missing-patient steps of one visit stand at `now`. Steps taken out of order count as the ones before them too: after a second
 * call nobody is told to make the first.
 */
export function missingPatientSteps(visit: { id: string, kind: VisitKind, state: VisitState, startsAt: Date }, events: readonly { step: MissingStepName, at: Date }[], now: Date): MissingProgress {
  const minutesLate = Math.max(0, Math.floor((now.getTime() - visit.startsAt.getTime()) / minuteMs))
  const done = [...events].filter(event => event.at <= now).sort((left, right) => left.at.getTime() - right.at.getTime()).map(event => event.step)
  const end = done.findLast(step => step === 'found' || step === 'not-found') ?? null
  const isWaiting = waiting.includes(visit.state)
  const begins = missingStepPlan[0]!.minutesLate
  const isMissing = isWaiting && end !== 'found' && minutesLate >= begins
  const furthest = Math.max(-1, ...done.map(step => missingStepPlan.findIndex(each => each.step === step)))
  const planned = isWaiting && end === null ? missingStepPlan[furthest + 1] : undefined
  const dueAt = planned && new Date(visit.startsAt.getTime() + planned.minutesLate * minuteMs)
  return {
    isMissing, minutesLate, done, end,
    next: planned && dueAt ? { step: planned.step, words: planned.words, dueAt, isDue: dueAt <= now } : null,
    raises: end === 'not-found' && visit.kind === 'day-one' ? missingPatientReason(visit.id) : null,
  }
}
