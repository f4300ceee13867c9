/** The sentences that patients' messages are made of; each language writes all of them. */
export const patientSentenceKeys = [
  'expected', 'today', 'changed', 'cancelled', 'questions', 'newStep', 'missing', 'confirmed', 'cannotCome', 'ringNow', 'which', 'stopped', 'started',
  'received', 'reply', 'move', 'worried', 'subjectVisit', 'subjectMessage',
] as const
export type PatientSentenceKey = typeof patientSentenceKeys[number]
export type PatientSentences = Readonly<Record<PatientSentenceKey, string>>
