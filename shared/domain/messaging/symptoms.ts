import { moreUrgent } from '#shared/domain/escalation/merge'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'

interface Symptom { id: string, words: string, leadsTo: Urgency | 'nurse' }

/**
 * What a patient may say is true now, and where it leads. Which signs need a person at once: the summary of the American
 * Academy of Ophthalmology's pattern for the adult cataract (sight falling, pain growing, redness growing, swelling round the eye);
 * how soon each is answered: proposed. No answer is ever called normal: two published question sets disagree about what
 * answers can predict (Moustafa 2019, PLoS One 14:e0221243; Zemaitiene 2021, Medicina 57:1144).
 */
export const symptoms = [
  { id: 'sight-worse', words: 'My sight is worse than yesterday', leadsTo: 'now' },
  { id: 'curtain', words: 'A curtain or shadow over part of my sight', leadsTo: 'now' },
  { id: 'pain-growing', words: 'It hurts a lot, or pain is getting worse', leadsTo: 'now' },
  { id: 'pain-vomiting', words: 'It hurts and I was sick', leadsTo: 'now' },
  { id: 'redness-growing', words: 'The eye is getting redder', leadsTo: 'now' },
  { id: 'lids-swollen', words: 'The lids are swollen', leadsTo: 'now' },
  { id: 'discharge', words: 'Sticky discharge', leadsTo: 'now' },
  { id: 'injury', words: 'Something hit the eye', leadsTo: 'now' },
  { id: 'flashes-floaters', words: 'New flashes or floating spots', leadsTo: 'today' },
  { id: 'something-on-eye', words: 'It feels as if something is on the eye', leadsTo: 'today' },
  { id: 'double', words: 'I see double', leadsTo: 'today' },
  { id: 'drops', words: 'My drops run out, or I cannot put them in', leadsTo: 'nurse' },
  { id: 'question', words: 'I have a question', leadsTo: 'nurse' },
] as const satisfies readonly Symptom[]
export type SymptomId = typeof symptoms[number]['id']
export const symptomIds = symptoms.map(each => each.id) as [SymptomId, ...SymptomId[]]

export type SymptomRoute = 'now' | 'today' | 'nurse' | 'none'

export interface SymptomReading {
  urgency: Urgency | null
  reasons: EscalationReason[]
  /** What waits for the nurse, in the patient's own choice of words; null when nothing does. */
  nurseWords: string | null
  route: SymptomRoute
}

/** What the chosen answers cause. Nothing chosen causes nothing, and takes away no visit that is due. */
export function readSymptoms(chosen: readonly SymptomId[]): SymptomReading {
  const said = symptoms.filter(each => chosen.includes(each.id))
  const reasons = said.flatMap((each): EscalationReason[] => each.leadsTo === 'nurse'
    ? []
    : [{ ruleId: `patient.${each.id}`, ruleVersion: 1, urgency: each.leadsTo, sentence: `The patient says: ${each.words.charAt(0).toLowerCase()}${each.words.slice(1)}.`, source: 'symptom check; proposed', findings: { symptom: each.id } }])
  const urgency = reasons.length ? reasons.map(reason => reason.urgency).reduce(moreUrgent) : null
  const forNurse = said.filter(each => each.leadsTo === 'nurse').map(each => each.words)
  const nurseWords = forNurse.length ? `${forNurse.join('. ')}.` : null
  return { urgency, reasons, nurseWords, route: urgency === 'now' ? 'now' : urgency ? 'today' : nurseWords ? 'nurse' : 'none' }
}
