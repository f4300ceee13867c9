import { describe, expect, it } from 'vitest'
import { pageWords } from '#shared/domain/messaging/page-words'
import { pageWordKeys } from '#shared/domain/messaging/page-words-keys'
import { symptomIds } from '#shared/domain/messaging/symptoms'
import { placeholdersIn } from '#shared/domain/messaging/templates'
import { languages } from '#shared/domain/messaging/vocabulary'

describe('the words of the patient\'s page', () => {
  it.each(languages)('are complete in %s, with the facts of the English ones', (language) => {
    const { words, symptoms } = pageWords[language]
    expect(Object.keys(words).sort()).toEqual([...pageWordKeys].sort())
    expect(Object.keys(symptoms).sort()).toEqual([...symptomIds].sort())
    for (const key of pageWordKeys) expect(placeholdersIn(words[key]).sort(), key).toEqual(placeholdersIn(pageWords.en.words[key]).sort())
    for (const text of [...Object.values(words), ...Object.values(symptoms)]) expect(text.trim()).not.toBe('')
  })

  it('carry the number to ring in every answer to the questions', () => {
    for (const language of languages) {
      for (const key of ['answerNow', 'answerToday', 'answerNurse', 'answerNone', 'notSent'] as const) expect(pageWords[language].words[key], `${key} in ${language}`).toContain('{phone}')
    }
  })

  it('never call a symptom normal', () => {
    for (const text of Object.values(pageWords.en.words)) expect(text).not.toMatch(/\bnormal\b|nothing to worry|all (?:is )?(?:fine|well)|harmless|expected after/i)
  })

  it('tell the sides apart in every language', () => {
    for (const language of languages) expect(pageWords[language].words.aboutRight).not.toBe(pageWords[language].words.aboutLeft)
  })

  it('are written in their own script', () => {
    const script = { ar: /\p{Script=Arabic}/u, ur: /\p{Script=Arabic}/u, bn: /\p{Script=Bengali}/u, pa: /\p{Script=Gurmukhi}/u } as const
    for (const [language, letters] of Object.entries(script)) {
      for (const text of [...Object.values(pageWords[language as keyof typeof script].words), ...Object.values(pageWords[language as keyof typeof script].symptoms)]) expect(text).toMatch(letters)
    }
  })
})
