import {
  ambiguousReplies, ambiguousWords, cannotComePhrases, changeReplies, confirmingSigns, courtesies, negations, noReplies, notWorry, startReplies, stopReplies, strongYes,
  weakYes, worriedSigns, worriedWords, wrongPersonPhrases,
} from '#shared/domain/messaging/reply-words'
import type { AnswerKind } from '#shared/domain/messaging/vocabulary'

export const replyMeanings = ['worried', 'stop', 'start', 'cannot-come', 'ambiguous', 'wrong-person', 'confirm', 'words'] as const
/** `words` is everything that only a person can read. */
export type ReplyMeaning = typeof replyMeanings[number]

/** What the last text asked, for a bare yes or no answers that. */
export type Asked = 'visit' | 'symptoms'

export interface ReplyReading {
  meaning: ReplyMeaning
  /** The visit is confirmed as well ("Yes. It hurts"). */
  confirms: boolean
  /** What decided, for the person who looks at it. */
  because: string[]
  /** More was said than the meaning holds, or nothing was understood: it waits for a person. */
  needsPerson: boolean
}

/**
 * Folds what differs between telephones: case, width, Latin accents, Arabic vowel signs and letter variants,
 * apostrophes, punctuation, drawn signs, letters held down ("yesss"). Vowel signs of Bengali and Gurmukhi are
 * letters and stay; their dots (nukta) do not.
 */
export function normaliseReply(text: string): string {
  return text.replace(/[\u2018\u2019\u02bc\u2032`\u00b4]/g, '\'').normalize('NFKC').toLowerCase()
    .normalize('NFD').replace(/\u0640/g, '').replace(/[\u0300-\u036f\u064b-\u065f\u0670\u09bc\u0a3c]/g, '').normalize('NFC')
    .replace(/ł/g, 'l').replace(/[ىی]/g, 'ي').replace(/[ةہ]/g, 'ه').replace(/ک/g, 'ك').replace(/ٱ/g, 'ا')
    .replace(/\bi'll\b/g, 'i will').replace(/'/g, '')
    .replace(/[^\p{L}\p{M}\p{N}]+/gu, ' ').trim()
    .replace(/(\p{L})\1{2,}/gu, '$1')
    .replace(/\b(?:can not|cant|carnt|cnt)\b/g, 'cannot').replace(/\bwont\b/g, 'will not').replace(/\bdont\b/g, 'do not')
    .replace(/\bcouldnt\b/g, 'could not').replace(/\bisnt\b/g, 'is not')
}

const prepared = new WeakMap<readonly string[], string[]>()

/** The phrases of a list as they look after folding, longest first. */
function folded(list: readonly string[]): string[] {
  const known = prepared.get(list)
  if (known) return known
  const ready = list.map(phrase => normaliseReply(phrase)).sort((a, b) => b.length - a.length)
  prepared.set(list, ready)
  return ready
}

function phrasesIn(words: string, list: readonly string[]): string[] {
  const padded = ` ${words} `
  return folded(list).filter(phrase => padded.includes(` ${phrase} `))
}

function without(words: string, list: readonly string[]): string {
  let padded = ` ${words} `
  for (const phrase of folded(list)) padded = padded.replaceAll(` ${phrase} `, '  ')
  return padded.replace(/\s+/g, ' ').trim()
}

function isOnly(words: string, list: readonly string[]): boolean {
  return folded(list).includes(words)
}

/**
 * What a patient's text means. Worry outranks everything, also a yes in the same text and STOP ("stop the pain" is
 * not STOP). STOP and START count only as the whole reply, politeness aside. 'Cancel' and 'end' are asked about. A denial
 * ("no pain") still counts as worry: a person looks, nothing is assumed.
 */
export function classifyReply(text: string, asked?: Asked): ReplyReading {
  const words = normaliseReply(text)
  const bare = without(words, courtesies) || words
  const confirms = confirmsVisit(text, asked)
  const worry = [...phrasesIn(without(words, notWorry), worriedWords), ...worriedSigns.filter(sign => text.includes(sign))]
  if (bare === 'help') worry.push('help')
  if (worry.length > 0) return { meaning: 'worried', confirms: confirms.yes, because: worry, needsPerson: true }

  const understood = (meaning: ReplyMeaning, because: string[], needsPerson: boolean): ReplyReading => ({ meaning, confirms: meaning === 'confirm', because, needsPerson })
  if (isOnly(bare, stopReplies)) return understood('stop', [bare], false)
  if (isOnly(bare, startReplies)) return understood('start', [bare], false)

  const wrong = phrasesIn(words, wrongPersonPhrases)
  if (wrong.length > 0) return understood('wrong-person', wrong, true)
  const cannot = phrasesIn(words, cannotComePhrases)
  if (isOnly(bare, changeReplies)) cannot.push(bare)
  if (cannot.length > 0) return understood('cannot-come', cannot, bare !== cannot[0])
  const unclear = phrasesIn(words, ambiguousWords)
  if (isOnly(bare, ambiguousReplies)) unclear.push(bare)
  if (unclear.length > 0) return understood('ambiguous', unclear, false)
  if (isOnly(bare, noReplies)) return bareNo(bare, asked)
  return readYes(words, confirms, asked)
}

function bareNo(bare: string, asked: Asked | undefined): ReplyReading {
  if (asked === 'visit') return { meaning: 'cannot-come', confirms: false, because: [bare], needsPerson: false }
  return { meaning: asked === 'symptoms' ? 'words' : 'ambiguous', confirms: false, because: [bare], needsPerson: asked === 'symptoms' }
}

function readYes(words: string, confirms: Confirmation, asked: Asked | undefined): ReplyReading {
  // Asked about symptoms, a bare yes says that there are some.
  if (asked === 'symptoms' && confirms.because.length > 0) return { meaning: 'worried', confirms: false, because: confirms.because, needsPerson: true }
  if (confirms.yes) return { meaning: 'confirm', confirms: true, because: confirms.because, needsPerson: confirms.more }
  if (confirms.because.length > 0) return { meaning: 'ambiguous', confirms: false, because: confirms.because, needsPerson: true }
  const onlyCourtesy = words !== '' && without(words, courtesies) === ''
  return { meaning: 'words', confirms: false, because: [], needsPerson: !onlyCourtesy }
}

interface Confirmation { yes: boolean, because: string[], more: boolean }

const yesTalk: readonly string[] = [...strongYes, ...weakYes, ...courtesies]
const none: Confirmation = { yes: false, because: [], more: false }

/** A yes in the first clause that is not politeness: a strong one whatever follows, a weak one only when it is all that clause says. */
function confirmsVisit(text: string, asked: Asked | undefined): Confirmation {
  const yes = asked !== 'symptoms'
  const words = normaliseReply(text)
  if (words === '') {
    const signs = confirmingSigns.filter(sign => text.includes(sign))
    return signs.length > 0 ? { yes, because: signs, more: false } : none
  }
  const clause = [...text.matchAll(/([^.!?,;:\n]+)([.!?,;:\n]?)/g)]
    .map(([, said = '', mark = '']) => ({ said: afterCourtesy(normaliseReply(said)), mark }))
    .find(({ said }) => said !== '')
  if (!clause || clause.mark === '?') return none
  const strong = folded(strongYes).find(phrase => clause.said === phrase || clause.said.startsWith(`${phrase} `))
  if (!strong && without(clause.said, yesTalk) !== '') return none
  const because = [strong ?? clause.said]
  const rest = without(words, yesTalk)
  if (folded(negations).some(negation => rest === negation || rest.startsWith(`${negation} `))) return { yes: false, because, more: true }
  return { yes, because, more: rest !== '' || text.includes('?') }
}

/** A clause from its first word that is not politeness. */
function afterCourtesy(words: string): string {
  const courtesy = folded(courtesies).find(phrase => words === phrase || words.startsWith(`${phrase} `))
  return courtesy === undefined ? words : afterCourtesy(words.slice(courtesy.length).trim())
}

const answers: Readonly<Record<ReplyMeaning, AnswerKind | undefined>> = {
  'worried': 'answer.worried',
  'stop': 'answer.stopped',
  'start': 'answer.started',
  'cannot-come': 'answer.cannot-come',
  'ambiguous': 'answer.which',
  'confirm': 'answer.confirmed',
  'words': 'answer.received',
  // Somebody else may hold this telephone: nothing more is sent to it.
  'wrong-person': undefined,
}

/** What is answered by itself; undefined when nothing may be. A confirmation with a question in it is also answered as confirmed. */
export function answerFor(meaning: ReplyMeaning): AnswerKind | undefined {
  return answers[meaning]
}

/** A clinician's answer to an alert: HAVE acknowledges, ON (or HAND ON) passes it to the next rung. Nothing else does either. */
export function classifyAlertReply(text: string): 'have' | 'hand-on' | 'words' {
  const words = normaliseReply(text)
  if (/^(?:i )?(?:have|have it|have this|got it)$/.test(words)) return 'have'
  return /^(?:hand )?on$/.test(words) ? 'hand-on' : 'words'
}

/** The same with the number of the escalation that it names, if it does: "HAVE 1042". A number in free words names nothing. */
export function readAlertReply(text: string): { meaning: 'have' | 'hand-on' | 'words', number: number | undefined } {
  const [, words = '', digits] = /^(.*?)\s+#?(\d{1,9})\s*\.?$/s.exec(text.trim()) ?? []
  const named = digits === undefined ? 'words' : classifyAlertReply(words)
  return named === 'words' ? { meaning: classifyAlertReply(text), number: undefined } : { meaning: named, number: Number(digits) }
}
