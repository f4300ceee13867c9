import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { DomainError } from '#shared/domain/errors'
import { clinicalWordsIn } from '#shared/domain/messaging/clinical-words'
import { reminderRules } from '#shared/domain/messaging/reminder-rules'
import { patientSentenceKeys } from '#shared/domain/messaging/template-sentence-keys'
import { patientSentences } from '#shared/domain/messaging/template-sentences'
import { fillTemplate, placeholders, placeholdersIn, renderTemplate, templateFor } from '#shared/domain/messaging/templates'
import type { TemplateValues } from '#shared/domain/messaging/templates'
import { languages, messageKinds } from '#shared/domain/messaging/vocabulary'

const values: TemplateValues = { date: 'Wednesday 14 October', time: '09:40', place: 'Ferncombe, door C', phone: '01632 960118', link: 'https://example.org/p/7f3k', urgency: 'Now', number: 'E-1042' }
const sent = ['text', 'email'] as const
const all = messageKinds.flatMap(kind => sent.flatMap(channel => languages.map(language => ({ kind, channel, language }))))

describe('every template', () => {
  it.each(all)('$kind by $channel in $language is complete, neutral and says what to do', ({ kind, channel, language }) => {
    const template = templateFor(kind, channel, language)
    const whole = `${template.subject ?? ''} ${template.text}`
    expect(clinicalWordsIn(whole, language)).toEqual([])
    for (const name of placeholdersIn(whole)) expect(placeholders).toContain(name)
    expect(template.subject === undefined).toBe(channel === 'text')
    if (reminderRules[kind].audience === 'patient') expect(placeholdersIn(template.text)).toContain('phone')
    else expect(placeholdersIn(template.text)).toContain('link')
    const rendered = renderTemplate({ kind, channel, language, values })
    expect(rendered.text).not.toMatch(/[{}]/)
    expect(rendered.direction).toBe(rendered.language === 'ar' || rendered.language === 'ur' ? 'rtl' : 'ltr')
  })

  it('ends a patient message with what to do if worried', () => {
    for (const { kind, channel, language } of all) {
      if (reminderRules[kind].audience !== 'patient') continue
      const { text } = templateFor(kind, channel, language)
      const tail = kind === 'answer.worried' ? patientSentences[language].ringNow : patientSentences[language].worried
      expect(text.endsWith(tail)).toBe(true)
    }
  })

  it('says the same facts in every language', () => {
    for (const key of patientSentenceKeys) {
      const facts = placeholdersIn(patientSentences.en[key]).sort()
      for (const language of languages) expect(placeholdersIn(patientSentences[language][key]).sort(), `${key} in ${language}`).toEqual(facts)
    }
  })

  it('is written in its own language', () => {
    const script: Record<string, RegExp> = { ar: /\p{Script=Arabic}/u, ur: /\p{Script=Arabic}/u, bn: /\p{Script=Bengali}/u, pa: /\p{Script=Gurmukhi}/u }
    for (const key of patientSentenceKeys) {
      const texts = languages.map(language => patientSentences[language][key])
      expect(new Set(texts).size, key).toBe(languages.length)
      for (const [language, letters] of Object.entries(script)) expect(patientSentences[language as 'ar'][key]).toMatch(letters)
    }
  })

  it('keeps the words to type in Latin letters', () => {
    for (const language of languages) {
      expect(patientSentences[language].reply).toMatch(/YES.*CHANGE/)
      expect(patientSentences[language].which).toMatch(/CHANGE.*STOP/)
    }
  })

  it('reads as written', () => {
    expect(renderTemplate({ kind: 'visit.reminder', channel: 'text', language: 'en', values }).text).toBe('Your visit is on Wednesday 14 October at 09:40, Ferncombe, door C. Reply YES to confirm, CHANGE to move it. Worried? Ring 01632 960118, day or night.')
    expect(renderTemplate({ kind: 'visit.changed', channel: 'email', language: 'en', values })).toEqual({ subject: 'Your visit', text: 'Your visit has a new time: Wednesday 14 October at 09:40, Ferncombe, door C.\n\nTo move it, ring 01632 960118.\n\nWorried? Ring 01632 960118, day or night.', language: 'en', direction: 'ltr' })
    expect(renderTemplate({ kind: 'alert.surgeon', channel: 'text', language: 'ur', values })).toEqual({ text: 'Dawnward: Now. Escalation E-1042. Open https://example.org/p/7f3k Reply HAVE to acknowledge.', language: 'en', direction: 'ltr' })
  })

  it('writes a telephone number in one piece between right-to-left words', () => {
    expect(renderTemplate({ kind: 'dayone.morning', channel: 'text', language: 'ar', values }).text).toContain('01632960118')
    expect(renderTemplate({ kind: 'dayone.morning', channel: 'text', language: 'ur', values: { ...values, phone: '+44 1632 960118' } }).text).toContain('\u200e+441632960118')
    expect(renderTemplate({ kind: 'dayone.morning', channel: 'text', language: 'bn', values }).text).toContain('01632 960118')
  })
})

describe('filling a template', () => {
  const refusal = (act: () => unknown): DomainError => {
    try {
      act()
    }
    catch (error) {
      return error as DomainError
    }
    throw new Error('was accepted')
  }

  it.each(all.filter(({ language }) => language === 'en'))('$kind by $channel is refused for every value it lacks', ({ kind, channel, language }) => {
    const { text, subject = '' } = templateFor(kind, channel, language)
    for (const name of placeholdersIn(text + subject)) {
      for (const blank of [undefined, '', ' \n ']) {
        const error = refusal(() => renderTemplate({ kind, channel, language, values: { ...values, [name]: blank } }))
        expect(error.code).toBe('messaging.value-missing')
        expect(error.fields.map(field => field.field)).toEqual([name])
      }
    }
  })

  it('names every missing value at once', () => {
    expect(refusal(() => fillTemplate('{date} {time} {place}', { time: '09:00' })).fields.map(field => field.field)).toEqual(['date', 'place'])
  })

  it('refuses placeholders that do not exist', () => {
    expect(refusal(() => fillTemplate('Dear {name}, {date}', values))).toMatchObject({
      code: 'messaging.placeholder-unknown', message: 'There is no placeholder {name}. Use {date}, {time}, {place}, {phone}, {link}, {urgency}, {number}.',
      fields: [{ field: 'name', code: 'unknown', message: '{name} is not a placeholder.' }],
    })
    expect(refusal(() => fillTemplate('{constructor}', values)).code).toBe('messaging.placeholder-unknown')
  })

  it('never reads a value as a template, and keeps names as they are', () => {
    fc.assert(fc.property(fc.string({ minLength: 1 }).filter(text => text.trim() !== ''), (place) => {
      expect(fillTemplate('at {place}.', { place })).toBe(`at ${place.replace(/\s+/g, ' ').trim()}.`)
    }))
    expect(fillTemplate('{place}', { place: ' door \n\t C ' })).toBe('door C')
    expect(fillTemplate('{place} {phone}', { place: 'a (b)-c d', phone: '(01632) 960-118' }, 'ar')).toBe('a (b)-c d 01632960118')
    expect(fillTemplate('{place} {date}', { place: '$& {date} O’Hara', date: 'Monday' })).toBe('$& {date} O’Hara Monday')
  })
})

describe('clinical words', () => {
  it.each([['Your cataract operation', 'en', ['cataract', 'operat']], ['LEFT EYE', 'en', ['eye', 'left']], ['Twoja zaćma', 'pl', ['zaćm']], ['آنکھ کا آپریشن', 'ur', ['آنکھ', 'آپریشن']], ['চোখের ড্রপ', 'bn', ['চোখ', 'ড্রপ']], ['ਅੱਖ', 'pa', ['ਅੱਖ']], ['موعد عملية الساد', 'ar', ['الساد', 'عملية']], ['eich llygad', 'cy', ['llygad']]] as const)('are found in %s', (text, language, expected) => {
    expect(clinicalWordsIn(text, language)).toEqual(expected)
  })

  it('are not found inside other words', () => {
    expect(clinicalWordsIn('They cleft a bright disposal', 'en')).toEqual([])
  })
})
