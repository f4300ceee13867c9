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
}

export const safetyQuestions: readonly SafetyQuestion[] = [
  { id: 'name', step: 'before-anaesthesia', asked: '“What is your name?”', agrees: 'Agrees', differs: 'Does not', stops: 'The name does not agree.' },
  { id: 'birth-date', step: 'before-anaesthesia', asked: '“When were you born?”', agrees: 'Agrees', differs: 'Does not', stops: 'The birth date does not agree.' },
  { id: 'eye', step: 'before-anaesthesia', asked: '“Which eye are we doing?”', agrees: 'Agrees', differs: 'Other', stops: 'The patient names another eye.' },
  { id: 'mark', step: 'before-anaesthesia', asked: 'The surgeon’s mark on the skin', agrees: 'Seen', differs: 'Not seen', stops: 'The mark is not over the eye to be operated.' },
  { id: 'consent', step: 'before-anaesthesia', asked: 'The signed consent, for this eye', agrees: 'Agrees', differs: 'Does not', stops: 'Consent does not agree with the plan.' },
  { id: 'allergies', step: 'before-anaesthesia', asked: '“Are you allergic to anything?”', agrees: 'As recorded', differs: 'Something else', stops: 'An allergy is not as recorded.' },
  { id: 'team', step: 'before-incision', asked: 'Everybody has said their name and part', agrees: 'Yes', differs: 'No', stops: 'The team has not introduced itself.' },
  { id: 'again', step: 'before-incision', asked: 'Name, operation and eye said aloud once more', agrees: 'All agree', differs: 'Somebody does not', stops: 'Not everybody agrees on patient, operation and eye.' },
  { id: 'antiseptic', step: 'before-incision', asked: 'Antiseptic on skin and eye, or what the allergy asks for', agrees: 'Done', differs: 'Not done', stops: 'The eye has not been prepared.' },
  { id: 'expected', step: 'before-incision', asked: 'What may be hard, and what it needs, is in the room', agrees: 'In the room', differs: 'Missing', stops: 'Equipment that this eye asks for is missing.' },
  { id: 'lens', step: 'before-incision', asked: 'The lens in the room is the lens planned', agrees: 'Agrees', differs: 'Does not', stops: 'The lens in the room is not the lens planned.' },
  { id: 'counts', step: 'before-leaving', asked: 'Instruments, needles and swabs counted', agrees: 'Complete', differs: 'Not complete', stops: 'The count is not complete.' },
  { id: 'implanted', step: 'before-leaving', asked: 'The implanted lens and its label said aloud', agrees: 'Agrees', differs: 'Does not', stops: 'The label is not that of the lens implanted.' },
  { id: 'equipment', step: 'before-leaving', asked: 'Equipment that failed has been named', agrees: 'None, or named', differs: 'Not yet', stops: 'Equipment trouble has not been named.' },
  { id: 'recovery', step: 'before-leaving', asked: 'What to watch in recovery, drops and shield', agrees: 'Said', differs: 'Not yet', stops: 'Recovery has not been told what to watch.' },
]

export const questionsOf = (step: SafetyStep): SafetyQuestion[] => safetyQuestions.filter(question => question.step === step)

/** Why the check stands still. `code` is a question's id or one of the lens codes. */
export interface StopReason { code: string, sentence: string }
