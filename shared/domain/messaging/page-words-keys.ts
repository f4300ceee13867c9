import type { SymptomId } from '#shared/domain/messaging/symptoms'

/** The words of the patient's own page; each language writes all of them. */
export const pageWordKeys = [
  'yourUnit', 'language', 'doorTitle', 'doorAsk', 'birthDate', 'birthDay', 'birthMonth', 'birthYear', 'birthHint', 'birthMissing', 'show', 'looking', 'doorUrgent', 'doorRefused', 'doorTooMany', 'unreachable',
  'morning', 'afternoon', 'evening', 'expectedToday', 'expectedOn', 'noVisit', 'aboutRight', 'aboutLeft', 'surgery', 'check', 'later', 'takes', 'directions', 'calendar', 'yes', 'anotherTime', 'saidYes', 'saidAnother',
  'feel', 'feelIntro', 'nothing', 'tellMore', 'tellMoreHint', 'choose', 'send', 'sending', 'sendToo', 'toldAt', 'answerNow', 'answerToday', 'answerNurse', 'answerNone', 'notSent',
  'untilSeen', 'bring', 'noDriving', 'noRubbing', 'ringUs', 'ringNote', 'ringNow', 'doNotWait', 'say', 'noAnswer', 'noAnswerDo', 'next', 'nextTold', 'nextRings', 'nextComeIn', 'untilThen', 'staysBooked', 'moreHelps', 'back', 'closed',
] as const
export type PageWordKey = typeof pageWordKeys[number]
export interface PageWords { words: Readonly<Record<PageWordKey, string>>, symptoms: Readonly<Record<SymptomId, string>> }
