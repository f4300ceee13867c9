import { easternPageWords } from '#shared/domain/messaging/page-words-east'
import type { PageWords } from '#shared/domain/messaging/page-words-keys'
import { latinPageWords } from '#shared/domain/messaging/page-words-latin'
import { symptoms } from '#shared/domain/messaging/symptoms'
import type { SymptomId } from '#shared/domain/messaging/symptoms'
import type { Language } from '#shared/domain/messaging/vocabulary'

const en: PageWords = {
  words: {
    yourUnit: 'Your eye unit', language: 'Language', doorTitle: 'Before we show your visit:', doorAsk: 'when were you born?', birthDate: 'Date of birth', birthDay: 'Day', birthMonth: 'Month', birthYear: 'Year', birthHint: 'For example 3 2 1955. It keeps your page from other people.', birthMissing: 'Enter the day, month and year.', show: 'Show my visit', looking: 'Looking…',
    doorUrgent: 'Lost your sight suddenly, or in strong pain? Do not wait for this page. Ring the number in our text. If nobody answers, go to the nearest emergency department.', doorRefused: 'We cannot open this page with that date. Look at the date again. A link also ends after some weeks: then ring the number in our text.', doorTooMany: 'Too many tries. Wait a few minutes, or ring the number in our text.', unreachable: 'We cannot reach the unit\'s computer. Ring the number in our text.',
    morning: 'Good morning {name}.', afternoon: 'Good afternoon {name}.', evening: 'Good evening {name}.', expectedToday: 'We expect you today at {time}.', expectedOn: 'We expect you on {date} at {time}.', noVisit: 'No visit is booked now.', aboutRight: 'It is about your right eye.', aboutLeft: 'It is about your left eye.', surgery: 'surgery', check: 'eye check', later: 'next', takes: 'It takes about 30 minutes.', directions: 'How to get there', calendar: 'Put it in my calendar', yes: 'Yes, I will be there', anotherTime: 'I need another time', saidYes: 'You told us that you are coming.', saidAnother: 'You need another time. We ring you. Until then the visit stays booked.',
    feel: 'How does the eye feel?', feelIntro: 'Choose everything that is true now. We read it day and night. It does not take the place of a visit.', nothing: 'Nothing of these', tellMore: 'Tell us more, in your own words', tellMoreHint: 'For example, since when.', choose: 'Choose what is true now, or write it.', send: 'Tell the unit', sending: 'Sending…', sendToo: 'Send this too', toldAt: 'You told us at {time}:', answerNow: 'Ring {phone} now. Somebody rings you within the hour.', answerToday: 'We ring you today. If it gets worse, ring {phone} at once.', answerNurse: 'A nurse reads this and answers today. If it gets worse, ring {phone}.', answerNone: 'Thank you. Come as planned. If anything changes, ring {phone}.', notSent: 'We did not get that. Ring us on {phone}.',
    untilSeen: 'Until we see you', bring: 'Bring your drops and your glasses.', noDriving: 'Do not drive. Ask someone to bring you.', noRubbing: 'Do not press or rub the eye.', ringUs: 'Ring us, {phone}', ringNote: 'Day and night. If you lose your sight suddenly, ring at once, do not send a text. If nobody answers, go to the nearest emergency department.', ringNow: 'Ring us now.', doNotWait: 'Do not wait for your visit, and do not wait for a text.', say: 'Say your name, that you had an eye operation, and what is wrong.', noAnswer: 'If nobody answers in 5 minutes', noAnswerDo: 'Go to the nearest emergency department. It is open day and night. Ask someone to take you, do not drive.', next: 'What happens next', nextTold: 'A surgeon has been told.', nextRings: 'Somebody rings you within the hour, also if you could not reach us. Keep the telephone with you.', nextComeIn: 'We may ask you to come in today.', untilThen: 'Until then', staysBooked: 'Your visit on {date} at {time} stays booked.', moreHelps: 'It does not replace the call. It helps the person who rings.', back: 'Back to my visit', closed: 'This page was open for a while. Enter your date of birth again.',
  },
  symptoms: Object.fromEntries(symptoms.map(each => [each.id, each.words])) as Record<SymptomId, string>,
}

/**
 * The words of the patient's own page, which is opened with the birth date and so may name the eye. What each answer leads to is
 * table 3 of the rules: no answer is ever called normal, and every one carries the number to ring.
 */
export const pageWords: Readonly<Record<Language, PageWords>> = { en, ...latinPageWords, ...easternPageWords }
