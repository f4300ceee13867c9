/**
 * The safety check of one case: what is asked when, and what stops it.
 *
 * The three moments and their content follow the Surgical Safety Checklist of the World Health Organization (2009), narrowed to
 * this operation and put in our own words. What is asked is said by people in the room; the product only holds the answers.
 */
export const safetySteps = ['before-anaesthesia', 'before-incision', 'before-leaving'] as const
export type SafetyStep = typeof safetySteps[number]

export const safetyStepLabels: Readonly<Record<SafetyStep, string>> = {
  'before-anaesthesia': 'Before anaesthesia', 'before-incision': 'Before incision', 'before-leaving': 'Before leaving',
}

export const answerWords = ['agrees', 'differs'] as const
export type SafetyAnswer = typeof answerWords[number]
export type SafetyAnswers = Record<string, SafetyAnswer>

export interface SafetyQuestion {
  id: string
  step: SafetyStep
  /** As it is asked aloud. */
  asked: string
  /** The words on the two answers. */
  agrees: string
  differs: string
  /** What the check says when the answer differs. */
  stops: string
  /** Only a surgeon's signed words lift this stop; the others are lifted by putting it right and signing the step. */
  needsSurgeon: boolean
}

export const safetyQuestions: readonly SafetyQuestion[] = [
  { id: 'name', step: 'before-anaesthesia', asked: '“What is your name?”', agrees: 'Agrees', differs: 'Does not', stops: 'The name does not agree.', needsSurgeon: true },
  { id: 'birth-date', step: 'before-anaesthesia', asked: '“When were you born?”', agrees: 'Agrees', differs: 'Does not', stops: 'The birth date does not agree.', needsSurgeon: true },
  { id: 'eye', step: 'before-anaesthesia', asked: '“Which eye are we doing?”', agrees: 'Agrees', differs: 'Other', stops: 'The patient names another eye.', needsSurgeon: true },
  { id: 'mark', step: 'before-anaesthesia', asked: 'The surgeon’s mark on the skin', agrees: 'Seen', differs: 'Not seen', stops: 'The mark is not over the eye to be operated.', needsSurgeon: true },
  { id: 'consent', step: 'before-anaesthesia', asked: 'The signed consent, for this eye', agrees: 'Agrees', differs: 'Does not', stops: 'Consent does not agree with the plan.', needsSurgeon: true },
  { id: 'allergies', step: 'before-anaesthesia', asked: '“Are you allergic to anything?”', agrees: 'As recorded', differs: 'Something else', stops: 'An allergy is not as recorded.', needsSurgeon: true },
  { id: 'team', step: 'before-incision', asked: 'Everybody has said their name and part', agrees: 'Yes', differs: 'No', stops: 'The team has not introduced itself.', needsSurgeon: false },
  { id: 'again', step: 'before-incision', asked: 'Name, operation and eye said aloud once more', agrees: 'All agree', differs: 'Somebody does not', stops: 'Not everybody agrees on patient, operation and eye.', needsSurgeon: true },
  { id: 'antiseptic', step: 'before-incision', asked: 'Antiseptic on skin and eye, or what the allergy asks for', agrees: 'Done', differs: 'Not done', stops: 'The eye has not been prepared.', needsSurgeon: false },
  { id: 'expected', step: 'before-incision', asked: 'What may be hard, and what it needs, is in the room', agrees: 'In the room', differs: 'Missing', stops: 'Equipment that this eye asks for is missing.', needsSurgeon: false },
  { id: 'lens', step: 'before-incision', asked: 'The lens in the room is the lens planned', agrees: 'Agrees', differs: 'Does not', stops: 'The lens in the room is not the lens planned.', needsSurgeon: true },
  { id: 'counts', step: 'before-leaving', asked: 'Instruments, needles and swabs counted', agrees: 'Complete', differs: 'Not complete', stops: 'The count is not complete.', needsSurgeon: false },
  { id: 'implanted', step: 'before-leaving', asked: 'The implanted lens and its label said aloud', agrees: 'Agrees', differs: 'Does not', stops: 'The label is not that of the lens implanted.', needsSurgeon: true },
  { id: 'equipment', step: 'before-leaving', asked: 'Equipment that failed has been named', agrees: 'None, or named', differs: 'Not yet', stops: 'Equipment trouble has not been named.', needsSurgeon: false },
  { id: 'recovery', step: 'before-leaving', asked: 'What to watch in recovery, drops and shield', agrees: 'Said', differs: 'Not yet', stops: 'Recovery has not been told what to watch.', needsSurgeon: false },
]

export const questionsOf = (step: SafetyStep): SafetyQuestion[] => safetyQuestions.filter(question => question.step === step)

/** Why the check stands still. `code` is a question's id or one of the lens codes. */
export interface StopReason { code: string, sentence: string }

export interface StopRecord { id: string, step: SafetyStep, scanId: string | null, reasons: readonly StopReason[] }
export interface CheckRecord<T extends StopRecord = StopRecord> {
  stops: readonly T[]
  /** Stops that a surgeon has explained. */
  explainedStopIds: readonly string[]
  /** Of the lens held up last; an earlier one is back on the shelf. */
  lastScanId: string | undefined
  signedSteps: readonly SafetyStep[]
}

/**
 * The stops that hold the case. A lens stop is lifted by a surgeon's words or by holding up another lens, which is judged anew; a stop
 * of identity, eye, mark, consent or allergy by a surgeon's words alone; any other by signing its step once it is put right.
 */
export function openStops<T extends StopRecord>({ stops, explainedStopIds, lastScanId, signedSteps }: CheckRecord<T>): T[] {
  return stops.filter((stop) => {
    if (explainedStopIds.includes(stop.id)) return false
    if (stop.scanId !== null) return stop.scanId === lastScanId
    return stop.reasons.some(({ code }) => safetyQuestions.find(({ id }) => id === code)?.needsSurgeon ?? true) || !signedSteps.includes(stop.step)
  })
}
