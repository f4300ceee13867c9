import { reminderRules } from '#shared/domain/messaging/reminder-rules'
import { renderTemplate } from '#shared/domain/messaging/templates'
import { measureText } from '#shared/domain/messaging/text-length'
import { visitWords } from '#shared/domain/messaging/visit-words'
import { languages, messageKinds, rightToLeftLanguages } from '#shared/domain/messaging/vocabulary'
import type { Language } from '#shared/domain/messaging/vocabulary'

/** Long values, so that what is shown is the most that a text can cost: a Wednesday in September, a long name of a place, a real link. */
const longest = { at: new Date('2026-09-23T09:40:00Z'), place: 'Ferncombe Community Eye Hospital, door C', phone: '01632 960118', link: `https://example.org/v/${'x'.repeat(43)}`, urgency: 'This week', number: '104275' }

/** Every built-in text in one language with long values, how many parts it takes, and the same in English when it is read by somebody who reads only that. */
export function presentTemplates(language: Language) {
  const words = (into: Language) => ({ ...visitWords(longest.at, 'Europe/London', into), place: longest.place, phone: longest.phone, link: longest.link, urgency: longest.urgency, number: longest.number })
  return {
    language, direction: rightToLeftLanguages.includes(language) ? 'rtl' as const : 'ltr' as const, languages: [...languages], checked: language === 'en',
    items: messageKinds.filter(kind => reminderRules[kind].audience === 'patient').map((kind) => {
      const { text } = renderTemplate({ kind, channel: 'text', language, values: words(language) })
      const { parts, units, encoding, unitsLeft } = measureText(text)
      return { kind, text, english: language === 'en' ? null : renderTemplate({ kind, channel: 'text', language: 'en', values: words('en') }).text, parts, units, encoding, unitsLeft, route: reminderRules[kind].route, quiet: reminderRules[kind].quiet }
    }),
  }
}
export type TemplateList = ReturnType<typeof presentTemplates>
