import type { PathwayState, Stage, Urgency } from '#shared/domain/pathway/vocabulary'

/** A group of stages as the horizon sorts them: an operated eye belongs to its day-one check, though its stage is still surgery. */
export const stageGroups = ['before-surgery', 'day-one', 'follow-up', 'discharged'] as const
export type StageGroup = typeof stageGroups[number]

/**
 * After how long an eye counts as late at its stage. 'proposed': starting values that a site's clinical lead signs before use.
 * Days are whole days of 24 hours; hours count from the end of surgery.
 */
export const lateAfter = {
  referralDays: 14,
  biometryDays: 42,
  /** A planned surgery day that has gone by without an operation note. */
  surgeryPassedHours: 24,
  dayOneHours: 48,
  followUpDays: 35,
} as const

export interface PathwayAtAGlance {
  stage: Stage
  state: PathwayState
  holdReason: string | null
  lookAgainOn: string | null
  isLate: boolean
  surgeryAt: Date | null
  operatedAt: Date | null
  triageDecision: string | null
  /** The next visit that is booked, if any. */
  nextVisit: { kind: string, startsAt: Date } | null
  dayOneReviewed: boolean
  escalation: { urgency: Urgency, sentence: string } | null
}

export interface NextStep {
  words: string
  /** A moment that belongs after the words; the screen writes it in the site's zone. */
  at: Date | null
  tone: 'plain' | 'late' | Urgency
}

const plain = (words: string, at: Date | null = null): NextStep => ({ words, at, tone: 'plain' })
const late = (words: string): NextStep => ({ words, at: null, tone: 'late' })

export function stageGroupOf(pathway: Pick<PathwayAtAGlance, 'stage' | 'operatedAt'>): StageGroup {
  if (pathway.stage === 'discharge') return 'discharged'
  if (pathway.stage === 'follow-up') return 'follow-up'
  if (pathway.stage === 'day-one') return 'day-one'
  return pathway.stage === 'surgery' && pathway.operatedAt ? 'day-one' : 'before-surgery'
}

/** What happens next with one eye, in words. The most pressing answer wins: an escalation, then a hold, then what is late. */
export function nextStep(pathway: PathwayAtAGlance): NextStep {
  if (pathway.escalation) return { words: pathway.escalation.sentence, at: null, tone: pathway.escalation.urgency }
  if (pathway.state === 'closed') return plain('Closed')
  if (pathway.state === 'held') return pathway.isLate ? late(`On hold, look again is overdue: ${pathway.holdReason ?? ''}`) : plain(`On hold: ${pathway.holdReason ?? ''}`)
  return byStage[pathway.stage](pathway)
}

const byStage: Record<Stage, (pathway: PathwayAtAGlance) => NextStep> = {
  'referral': ({ triageDecision, isLate }) => {
    const words = triageDecision === 'accepted' ? 'Accepted: go on to biometry' : triageDecision === 'returned' ? 'Returned to the referrer' : 'Triage'
    return isLate ? late(`${words}, late`) : plain(words)
  },
  'biometry': ({ isLate }) => isLate ? late('Biometry and plan, late') : plain('Biometry, plan and consent'),
  'surgery': (pathway) => {
    if (pathway.operatedAt) return firstCheck(pathway)
    if (pathway.isLate) return late('Surgery day has passed, no note')
    return pathway.surgeryAt ? plain('Surgery', pathway.surgeryAt) : plain('Not on a theatre list')
  },
  'day-one': firstCheck,
  'follow-up': ({ nextVisit, isLate }) => nextVisit ? plain('Follow-up', nextVisit.startsAt) : isLate ? late('Follow-up late, not booked') : plain('Book the follow-up'),
  'discharge': () => plain('Discharged'),
}

function firstCheck(pathway: PathwayAtAGlance): NextStep {
  if (pathway.dayOneReviewed) return plain('Day one signed: go on to follow-up')
  if (pathway.isLate) return late(pathway.nextVisit ? 'Day-one check late' : 'Day-one check late, not booked')
  return pathway.nextVisit ? plain('Day-one check', pathway.nextVisit.startsAt) : plain('Book the day-one check')
}
