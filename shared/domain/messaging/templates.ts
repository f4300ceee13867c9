import { DomainError } from '#shared/domain/errors'
import { patientSentences } from '#shared/domain/messaging/template-sentences'
import type { PatientSentenceKey } from '#shared/domain/messaging/template-sentence-keys'
import { rightToLeftLanguages } from '#shared/domain/messaging/vocabulary'
import type { Channel, Language, MessageKind } from '#shared/domain/messaging/vocabulary'

export const placeholders = ['date', 'time', 'place', 'phone', 'link', 'urgency', 'number'] as const
export type Placeholder = typeof placeholders[number]
export type TemplateValues = Partial<Record<Placeholder, string>>

export interface Template {
  text: string
  /** E-mail only. */
  subject?: string
}

export interface RenderedMessage extends Template {
  language: Language
  direction: 'ltr' | 'rtl'
}

/** Rises when any built-in text changes; kept with each message. */
export const templatesVersion = 2

interface PatientTemplate { say: PatientSentenceKey, subject: 'subjectVisit' | 'subjectMessage', movable?: true, withPage?: true, withoutWorried?: true }

/** Which sentences make up a patient's message. Every one ends with what to do if worried, or is that. */
const patientTemplates: Readonly<Partial<Record<MessageKind, PatientTemplate>>> = {
  'surgery.reminder': { say: 'expected', subject: 'subjectVisit', movable: true },
  // The one that says when to come after the operation also leads to the patient's own page.
  'dayone.evening': { say: 'expected', subject: 'subjectVisit', movable: true, withPage: true },
  'dayone.morning': { say: 'today', subject: 'subjectVisit' },
  'visit.reminder': { say: 'expected', subject: 'subjectVisit', movable: true },
  'visit.changed': { say: 'changed', subject: 'subjectVisit', movable: true },
  'visit.cancelled': { say: 'cancelled', subject: 'subjectVisit' },
  'safety.day3': { say: 'questions', subject: 'subjectMessage' },
  'safety.day7': { say: 'questions', subject: 'subjectMessage' },
  'drops.change': { say: 'newStep', subject: 'subjectMessage' },
  'missing.patient': { say: 'missing', subject: 'subjectVisit' },
  'answer.confirmed': { say: 'confirmed', subject: 'subjectVisit' },
  'answer.cannot-come': { say: 'cannotCome', subject: 'subjectVisit' },
  'answer.worried': { say: 'ringNow', subject: 'subjectMessage', withoutWorried: true },
  'answer.which': { say: 'which', subject: 'subjectVisit' },
  'answer.stopped': { say: 'stopped', subject: 'subjectMessage' },
  'answer.started': { say: 'started', subject: 'subjectMessage' },
  'answer.received': { say: 'received', subject: 'subjectMessage' },
}

/** To staff and referrers: no patient's name and nothing clinical, for a telephone lies on tables. English only. */
const officeTemplates: Readonly<Partial<Record<MessageKind, Record<'text' | 'email', Template>>>> = {
  'alert.surgeon': {
    text: { text: 'Dawnward: {urgency}. Escalation {number}. Open {link} Reply HAVE to acknowledge.' },
    email: { subject: '{urgency}: escalation {number} waits for you', text: 'Escalation {number}, urgency {urgency}, waits for you.\n\nRead and acknowledge it: {link}\n\nIf nobody acknowledges it, the next person on call is told.' },
  },
  'alert.rung': {
    text: { text: 'Dawnward: {urgency}, not yet acknowledged, now with you. Escalation {number}. Open {link} Reply HAVE to acknowledge, ON to hand on.' },
    email: { subject: '{urgency}: escalation {number} is now with you', text: 'Escalation {number}, urgency {urgency}, was not acknowledged and is now with you.\n\nRead and acknowledge it: {link}\n\nIf nobody acknowledges it, the next person on call is told.' },
  },
  'letter.sent': {
    text: { text: 'A letter is ready for you: {link} Questions: {phone}.' },
    email: { subject: 'A letter is ready for you', text: 'A letter about somebody in our shared care is ready for you.\n\nOpen it: {link}\n\nQuestions: {phone}.' },
  },
}

/** The built-in template of a kind, with its placeholders. */
export function templateFor(kind: MessageKind, channel: Exclude<Channel, 'call'>, language: Language): Template {
  const office = officeTemplates[kind]
  if (office) return office[channel]
  const parts = patientTemplates[kind]
  if (!parts) throw new TypeError(`no template for ${kind}`)
  const sentences = patientSentences[language]
  const worried = parts.withoutWorried ? [] : [sentences.worried]
  if (channel === 'text') return { text: [sentences[parts.say], ...(parts.movable ? [sentences.reply] : []), ...(parts.withPage ? ['{link}'] : []), ...worried].join(' ') }
  return { subject: sentences[parts.subject], text: [sentences[parts.say], ...(parts.movable ? [sentences.move] : []), ...(parts.withPage ? ['{link}'] : []), ...worried].join('\n\n') }
}

/** The placeholders of a text, in order, once each. */
export function placeholdersIn(text: string): string[] {
  return [...new Set([...text.matchAll(/\{([^{}]*)\}/g)].map(match => match[1] ?? ''))]
}

/**
 * Puts values into a template, built in or a site's own. Values are never read as templates themselves.
 * @throws DomainError `messaging.placeholder-unknown` for a placeholder that does not exist, `messaging.value-missing`
 * naming every value that is missing or blank: a message with a hole is never sent.
 */
export function fillTemplate(text: string, values: TemplateValues, language: Language = 'en'): string {
  const used = placeholdersIn(text)
  const unknown = used.filter(name => !(placeholders as readonly string[]).includes(name))
  if (unknown.length > 0) {
    throw new DomainError('messaging.placeholder-unknown', `There is no placeholder {${unknown.join('}, {')}}. Use ${placeholders.map(name => `{${name}}`).join(', ')}.`, { fields: unknown.map(name => ({ field: name, code: 'unknown', message: `{${name}} is not a placeholder.` })) })
  }
  const given = (name: string) => (values[name as Placeholder] ?? '').replace(/\s+/g, ' ').trim()
  const missing = used.filter(name => given(name) === '')
  if (missing.length > 0) {
    throw new DomainError('messaging.value-missing', `The message cannot be written without ${missing.join(', ')}.`, { fields: missing.map(name => ({ field: name, code: 'required', message: `Enter the ${name}.` })) })
  }
  return text.replace(/\{([^{}]*)\}/g, (_, name: string) => name === 'phone' ? phoneFor(given(name), language) : given(name))
}

/** Between right-to-left words a telephone number written in groups is shown with its groups swapped; so it is written in one. */
function phoneFor(phone: string, language: Language): string {
  if (!rightToLeftLanguages.includes(language)) return phone
  const joined = phone.replace(/[\s()-]/g, '')
  return joined.startsWith('+') ? `\u200e${joined}` : joined
}

export interface RenderInput { kind: MessageKind, channel: Exclude<Channel, 'call'>, language: Language, values: TemplateValues }

/** A message ready to send. Staff and referrers read English whatever the language asked. Errors as `fillTemplate`. */
export function renderTemplate({ kind, channel, language: wanted, values }: RenderInput): RenderedMessage {
  const language = officeTemplates[kind] ? 'en' : wanted
  const { text, subject } = templateFor(kind, channel, language)
  return {
    text: fillTemplate(text, values, language),
    ...(subject === undefined ? {} : { subject: fillTemplate(subject, values, language) }),
    language,
    direction: rightToLeftLanguages.includes(language) ? 'rtl' : 'ltr',
  }
}
