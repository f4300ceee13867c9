import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { answerFor, classifyAlertReply, readAlertReply, classifyReply, normaliseReply, replyMeanings } from '#shared/domain/messaging/reply'
import { cannotComePhrases, startReplies, stopReplies, strongYes, worriedSigns, worriedWords } from '#shared/domain/messaging/reply-words'

const listedWords = fc.constantFrom(...strongYes, ...cannotComePhrases, ...stopReplies, ...startReplies, ...worriedWords)
const meaning = (text: string) => classifyReply(text).meaning

describe('a reply that confirms', () => {
  it.each(['YES', 'yes', 'Yes.', 'yes!!!', 'Yesss', 'y', 'Yep 👍', '👍', '👍🏽', '✅', 'Ok', 'OK thanks', 'okay, thank you', 'Yes please', 'Confirm', 'CONFIRMED', 'I’ll be there', "I'll be there", 'I´ll be there', 'Thanks, yes', 'Hi, yes I will come. Thank you', 'see you then x', 'That’s fine', 'No problem', 'No worries, see you tomorrow', 'yes no problem', 'Ydw, diolch', 'Tak, dziękuję', 'نعم', 'نَعَم', 'হ্যাঁ', 'ਹਾਂ ਜੀ', 'جی ہاں', 'ہاں، شکریہ', 'ＹＥＳ'])('%s', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'confirm', confirms: true, needsPerson: false })
  })

  it.each(['Yes. Is it all right that it waters?', 'Yes, can my husband come in with me', 'ok. which door?', 'yes but I may be late'])('%s also waits for a person', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'confirm', confirms: true, needsPerson: true })
  })

  it.each(['ok to drive?', 'Is it ok to drive?', 'yes?', 'good food is important'])('%s confirms nothing', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'words', confirms: false, needsPerson: true })
  })

  it('asks when yes and no stand together', () => {
    expect(classifyReply('yes no')).toMatchObject({ meaning: 'ambiguous', needsPerson: true })
    expect(classifyReply('yes not sure')).toMatchObject({ meaning: 'ambiguous', needsPerson: true })
  })
})

describe('a reply that worries', () => {
  it.each([
    'It hurts more than yesterday and I was sick', 'Yes but it hurts a lot', 'YES. pain', 'I can’t see', 'cant see', 'I can not see out of it', 'there is blood', 'It’s worse', 'STOP the pain', 'stop it hurts', 'Please stop the pain', 'cancel, it is very painful',
    'no pain', 'HELP', 'help!', 'please help', 'I have a curtain coming down', 'new flashes', 'everything is blurry', 'I fell over', 'vision gone', 'not right', '🤕', 'yes 😭', 'I am worried', 'help me', 'PAIIIIN pain', 'I couldn’t see this morning',
    'Mae poen gen i', 'Boli mnie', 'ból', 'Nie widzę', 'عندي ألم', 'أَلَم', 'لا أرى', 'ব্যথা', 'দেখতে পাচ্ছি না', 'ਦਰਦ ਹੈ', 'ਖ਼ੂਨ', 'درد ہے', 'نظر نہیں آتا', 'dard ho raha hai',
  ])('%s', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'worried', needsPerson: true })
  })

  it('keeps the confirmation beside the worry', () => {
    expect(classifyReply('Yes I will come but it hurts')).toMatchObject({ meaning: 'worried', confirms: true })
    expect(classifyReply('It hurts')).toMatchObject({ confirms: false, because: ['hurts'] })
  })

  it.each(['I took a painkiller and painted the door', 'No worries', 'credit card', 'I need a helping hand', 'ready', 'The Hurtwood bus'])('%s is not worry', (text) => {
    expect(meaning(text)).not.toBe('worried')
  })

  it('reads a bare yes to the symptom questions as worry, and a bare no as nothing said', () => {
    expect(classifyReply('yes', 'symptoms')).toMatchObject({ meaning: 'worried', confirms: false })
    expect(classifyReply('👍', 'symptoms').meaning).not.toBe('confirm')
    expect(classifyReply('no', 'symptoms')).toMatchObject({ meaning: 'words', needsPerson: true })
  })

  it('outranks everything it is mixed with', () => {
    fc.assert(fc.property(fc.constantFrom(...worriedWords, ...worriedSigns), fc.constantFrom('yes', 'STOP', 'cancel', 'start', 'I cannot come', 'thanks', 'ok', 'wrong number'), fc.boolean(), fc.constantFrom('. ', ' ', ', ', '\n', '!! '), (worry, other, first, between) => {
      expect(meaning(first ? `${worry}${between}${other}` : `${other}${between}${worry}`)).toBe('worried')
    }), { numRuns: 2000 })
  })
})

describe('a reply that stops or starts texts', () => {
  it.each(['STOP', 'stop', 'Stop.', ' stop!! ', 'STOP please', 'Please stop', 'stop texting me', 'Stop sending me texts', 'StopAll', 'unsubscribe', 'opt out', 'Don’t text me', 'stopio', 'إيقاف', 'বন্ধ', 'ਬੰਦ ਕਰੋ', 'بند کریں'])('%s stops', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'stop', needsPerson: false })
  })

  it.each(['can I stop the drops', 'where is the bus stop', 'I will stop by at nine', 'stop and start'])('%s does not', (text) => {
    expect(meaning(text)).toBe('words')
  })

  it.each(['START', 'unstop', 'start please', 'شروع'])('%s starts', (text) => {
    expect(meaning(text)).toBe('start')
  })
})

describe('a reply about the visit', () => {
  it.each(['I can’t come', 'cannot make it tomorrow', 'Sorry can not attend', 'CHANGE', 'change please', 'Yes sorry I can’t come', 'need to cancel, cannot make it', 'can I reschedule?', 'methu dod', 'nie mogę przyjść', 'لا أستطيع الحضور', 'আসতে পারব না', 'ਨਹੀਂ ਆ ਸਕਦਾ', 'نہیں آ سکتا'])('%s cannot come', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'cannot-come', confirms: false })
  })

  it.each(['cancel', 'CANCEL', 'Cancel please', 'cancel my appointment', 'cancel texts', 'END', 'canslo', 'anuluj', 'إلغاء', 'বাতিল', 'منسوخ'])('%s is asked about, not guessed', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'ambiguous', confirms: false })
    expect(answerFor(meaning(text))).toBe('answer.which')
  })

  it('reads a bare no by what was asked', () => {
    expect(classifyReply('No', 'visit').meaning).toBe('cannot-come')
    expect(classifyReply('no thanks', 'visit').meaning).toBe('cannot-come')
    expect(classifyReply('No').meaning).toBe('ambiguous')
  })

  it.each(['who is this?', 'Wrong number', 'wrong person sorry', 'zły numer'])('%s is somebody else, and is not answered', (text) => {
    expect(meaning(text)).toBe('wrong-person')
    expect(answerFor('wrong-person')).toBeUndefined()
  })

  it.each(['Is there a change in my plan', 'at the end of the road', 'Can my husband come in with me', 'I cannot find door C', 'asdf', '12', '😀', ''])('%s goes to a person', (text) => {
    expect(classifyReply(text)).toMatchObject({ meaning: 'words', needsPerson: true })
  })

  it('lets plain thanks rest', () => {
    expect(classifyReply('Thank you very much')).toMatchObject({ meaning: 'words', needsPerson: false })
  })
})

describe('the whole reading', () => {
  it.each([
    ['STOP please', undefined, { meaning: 'stop', confirms: false, because: ['stop'], needsPerson: false }],
    ['Start', undefined, { meaning: 'start', confirms: false, because: ['start'], needsPerson: false }],
    ['Wrong number', undefined, { meaning: 'wrong-person', confirms: false, because: ['wrong number'], needsPerson: true }],
    ['I can’t come', undefined, { meaning: 'cannot-come', confirms: false, because: ['cannot come'], needsPerson: true }],
    ['can’t come, sorry', undefined, { meaning: 'cannot-come', confirms: false, because: ['cannot come'], needsPerson: false }],
    ['Can’t come', undefined, { meaning: 'cannot-come', confirms: false, because: ['cannot come'], needsPerson: false }],
    ['CHANGE', undefined, { meaning: 'cannot-come', confirms: false, because: ['change'], needsPerson: false }],
    ['cancel', undefined, { meaning: 'ambiguous', confirms: false, because: ['cancel'], needsPerson: false }],
    ['END', undefined, { meaning: 'ambiguous', confirms: false, because: ['end'], needsPerson: false }],
    ['no', 'visit', { meaning: 'cannot-come', confirms: false, because: ['no'], needsPerson: false }],
    ['no', undefined, { meaning: 'ambiguous', confirms: false, because: ['no'], needsPerson: false }],
    ['no', 'symptoms', { meaning: 'words', confirms: false, because: ['no'], needsPerson: true }],
    ['yes', 'symptoms', { meaning: 'worried', confirms: false, because: ['yes'], needsPerson: true }],
    ['👍', 'symptoms', { meaning: 'worried', confirms: false, because: ['👍'], needsPerson: true }],
    ['which door', 'symptoms', { meaning: 'words', confirms: false, because: [], needsPerson: true }],
    ['yes, but it hurts', 'symptoms', { meaning: 'worried', confirms: false, because: ['hurts'], needsPerson: true }],
    ['yes no', undefined, { meaning: 'ambiguous', confirms: false, because: ['yes'], needsPerson: true }],
    ['ok thanks', undefined, { meaning: 'confirm', confirms: true, because: ['ok thanks'], needsPerson: false }],
    ['yes', 'visit', { meaning: 'confirm', confirms: true, because: ['yes'], needsPerson: false }],
    ['👍', 'visit', { meaning: 'confirm', confirms: true, because: ['👍'], needsPerson: false }],
    ['Many thanks nurse, yes', undefined, { meaning: 'confirm', confirms: true, because: ['yes'], needsPerson: false }],
    ['Help', undefined, { meaning: 'worried', confirms: false, because: ['help'], needsPerson: true }],
    ['hello', undefined, { meaning: 'words', confirms: false, because: [], needsPerson: false }],
  ] as const)('%s, asked %s', (text, asked, expected) => {
    expect(classifyReply(text, asked)).toEqual(expected)
  })

  it('is answered by its own message', () => {
    expect(replyMeanings.map(each => answerFor(each))).toEqual(['answer.worried', 'answer.stopped', 'answer.started', 'answer.cannot-come', 'answer.which', undefined, 'answer.confirmed', 'answer.received'])
  })

  it('folds what telephones write differently', () => {
    expect(normaliseReply('  I’ll  COME… won’t, isn´t; couldn`t  ')).toBe('i will come will not is not could not')
    expect(normaliseReply('Łódź ćma')).toBe('lodz cma')
    expect(normaliseReply('نَعَـــم، ٱلرؤية')).toBe('نعم الرويه')
    expect(normaliseReply('ٹھیک')).toBe(normaliseReply('ٹھيك'))
    expect(normaliseReply('ਖ਼ੂਨ')).toBe(normaliseReply('ਖੂਨ'))
  })
})

describe('any reply', () => {
  it('means the same in capitals, with punctuation and spaces around it', () => {
    fc.assert(fc.property(listedWords, fc.constantFrom('', '!', '...', '!!', ' 🙂'), (text, tail) => {
      expect(meaning(`  ${text.toUpperCase()}${tail} `)).toBe(meaning(text))
    }), { numRuns: 1000 })
  })

  it('is classified without throwing, whatever it is', () => {
    fc.assert(fc.property(fc.oneof(fc.string({ unit: 'grapheme' }), fc.string({ unit: 'binary' })), fc.constantFrom('visit' as const, 'symptoms' as const, undefined), (text, asked) => {
      const reading = classifyReply(text, asked)
      expect(replyMeanings).toContain(reading.meaning)
      if (reading.meaning === 'confirm') expect(reading.confirms).toBe(true)
    }), { numRuns: 1000 })
  })
})

describe('folding', () => {
  it('is done once and for all', () => {
    fc.assert(fc.property(fc.oneof(listedWords, fc.stringMatching(/^[a-zA-Z'’`.,! \n0-9]{0,30}$/)), (text) => {
      expect(normaliseReply(normaliseReply(text))).toBe(normaliseReply(text))
    }), { numRuns: 1000 })
  })
})

describe('an answer to an alert', () => {
  it.each([['HAVE', 'have'], ['have.', 'have'], ['I have it', 'have'], ['HAND ON', 'hand-on'], ['on', 'hand-on'], ['I have a question', 'words'], ['they have', 'words'], ['got it', 'have'], ['on my way', 'words'], ['come on', 'words'], ['ok', 'words'], ['', 'words']] as const)('%s is %s', (text, expected) => {
    expect(classifyAlertReply(text)).toBe(expected)
  })
})

describe('an answer to an alert that names an escalation', () => {
  it.each([
    ['HAVE 1042', 'have', 1042], ['have #7.', 'have', 7], ['on 12', 'hand-on', 12], ['HAVE', 'have', undefined], ['Hand on', 'hand-on', undefined],
    ['In theatre until 4', 'words', undefined], ['have 12 more', 'words', undefined], ['', 'words', undefined],
  ] as const)('%s', (text, meaning, number) => {
    expect(readAlertReply(text)).toEqual({ meaning, number })
  })
})
