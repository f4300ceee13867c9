import type { Language } from '#shared/domain/messaging/vocabulary'
import type { PatientSentences } from '#shared/domain/messaging/template-sentence-keys'
import { easternSentences } from '#shared/domain/messaging/template-sentences-east'

const en: PatientSentences = {
  expected: 'Your visit is on {date} at {time}, {place}.',
  today: 'Your visit is today at {time}, {place}.',
  changed: 'Your visit has a new time: {date} at {time}, {place}.',
  cancelled: 'Your visit on {date} at {time} will not take place. We will contact you about a new one.',
  questions: 'How are you today? Please answer a few short questions: {link}',
  newStep: 'Your plan has a new step today, {date}: {link}',
  missing: 'We expected you at {time}, {place}. Please come now, or ring {phone}.',
  confirmed: 'Thank you, your visit is confirmed.',
  cannotCome: 'Thank you for telling us. We will ring you about another time.',
  ringNow: 'Ring {phone} now. If nobody answers, go to the nearest emergency department. A person here will also ring you within the hour.',
  which: 'Do you want to move your visit, or to get no more texts? Reply CHANGE or STOP.',
  stopped: 'You will get no more texts from us. Your visits and your care do not change.',
  started: 'You will get texts from us again.',
  received: 'Thank you. A person here will read your message.',
  reply: 'Reply YES to confirm, CHANGE to move it.',
  move: 'To move it, ring {phone}.',
  worried: 'Worried? Ring {phone}, day or night.',
  subjectVisit: 'Your visit',
  subjectMessage: 'A message for you',
}

const cy: PatientSentences = {
  expected: 'Mae eich ymweliad ar {date} am {time}, {place}.',
  today: 'Mae eich ymweliad heddiw am {time}, {place}.',
  changed: 'Mae amser newydd i\'ch ymweliad: {date} am {time}, {place}.',
  cancelled: 'Ni fydd eich ymweliad ar {date} am {time} yn digwydd. Byddwn yn cysylltu â chi am un newydd.',
  questions: 'Sut ydych chi heddiw? Atebwch ychydig o gwestiynau byr: {link}',
  newStep: 'Mae cam newydd yn eich cynllun heddiw, {date}: {link}',
  missing: 'Roeddem yn eich disgwyl am {time}, {place}. Dewch nawr neu ffoniwch {phone}.',
  confirmed: 'Diolch, mae eich ymweliad wedi\'i gadarnhau.',
  cannotCome: 'Diolch am roi gwybod. Byddwn yn eich ffonio am amser arall.',
  ringNow: 'Ffoniwch {phone} nawr. Os nad oes ateb, ewch i\'r adran achosion brys agosaf. Bydd rhywun yma hefyd yn eich ffonio o fewn yr awr.',
  which: 'Ydych chi am symud eich ymweliad, neu beidio â chael negeseuon testun? Atebwch CHANGE neu STOP.',
  stopped: 'Ni chewch ragor o negeseuon testun gennym. Nid yw eich ymweliadau na\'ch gofal yn newid.',
  started: 'Byddwch yn cael negeseuon testun gennym eto.',
  received: 'Diolch. Bydd rhywun yma yn darllen eich neges.',
  reply: 'Atebwch YES i gadarnhau, CHANGE i\'w symud.',
  move: 'I\'w symud, ffoniwch {phone}.',
  worried: 'Yn poeni? Ffoniwch {phone}, ddydd neu nos.',
  subjectVisit: 'Eich ymweliad',
  subjectMessage: 'Neges i chi',
}

const pl: PatientSentences = {
  expected: 'Wizyta: {date}, godz. {time}, {place}.',
  today: 'Wizyta jest dzisiaj o {time}, {place}.',
  changed: 'Nowy termin wizyty: {date}, godz. {time}, {place}.',
  cancelled: 'Wizyta {date} o {time} nie odbędzie się. Skontaktujemy się w sprawie nowego terminu.',
  questions: 'Jak się Pan/Pani dzisiaj czuje? Prosimy odpowiedzieć na kilka krótkich pytań: {link}',
  newStep: 'Dzisiaj, {date}, zaczyna się nowy etap planu: {link}',
  missing: 'Czekaliśmy o {time}, {place}. Prosimy przyjść teraz lub zadzwonić: {phone}.',
  confirmed: 'Dziękujemy, wizyta jest potwierdzona.',
  cannotCome: 'Dziękujemy za wiadomość. Zadzwonimy w sprawie innego terminu.',
  ringNow: 'Prosimy natychmiast zadzwonić: {phone}. Jeśli nikt nie odbierze, prosimy udać się na najbliższy oddział ratunkowy. Zadzwonimy też w ciągu godziny.',
  which: 'Czy chodzi o zmianę wizyty, czy o rezygnację z SMS-ów? Prosimy odpisać CHANGE lub STOP.',
  stopped: 'Nie będziemy już wysyłać SMS-ów. Wizyty i opieka pozostają bez zmian.',
  started: 'Znów będziemy wysyłać SMS-y.',
  received: 'Dziękujemy. Pracownik przeczyta wiadomość.',
  reply: 'Odpisz YES, aby potwierdzić, CHANGE, aby zmienić.',
  move: 'Aby zmienić termin, prosimy zadzwonić: {phone}.',
  worried: 'Coś niepokoi? Zadzwoń: {phone}, w dzień i w nocy.',
  subjectVisit: 'Wizyta',
  subjectMessage: 'Wiadomość',
}

/**
 * The sentences that patients' messages are made of. Neutral: when, where, telephone, what to do; never a diagnosis,
 * an eye, an operation, a medicine or a finding.
 *
 * English is ours. EVERY OTHER LANGUAGE NEEDS A NATIVE READER'S CHECK BEFORE USE; until a site has recorded that
 * check it should send English and have a nurse ring. YES, CHANGE and STOP stay Latin: they are what is typed.
 */
export const patientSentences: Readonly<Record<Language, PatientSentences>> = { en, cy, pl, ...easternSentences }
