import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { measureText, plainPunctuation } from '#shared/domain/messaging/text-length'
import { renderTemplate } from '#shared/domain/messaging/templates'
import { languages, messageKinds } from '#shared/domain/messaging/vocabulary'
import { reminderRules } from '#shared/domain/messaging/reminder-rules'

/**
 * Sizes: 160 septets or 70 units in one part; 153 or 67 in each of several (3GPP TS 23.038 and 23.040). Totals worked
 * out by hand. One vendor page prints 309 for two 7-bit parts; 2 x 153 is 306.
 */
const A = (count: number) => 'A'.repeat(count)
const vectors: [string, string, 'GSM-7' | 'UCS-2', number, number][] = [
  ['nothing', '', 'GSM-7', 0, 0], ['one letter', 'A', 'GSM-7', 1, 1], ['160 letters', A(160), 'GSM-7', 160, 1], ['161 letters', A(161), 'GSM-7', 161, 2],
  ['306 letters', A(306), 'GSM-7', 306, 2], ['307 letters', A(307), 'GSM-7', 307, 3], ['459 letters', A(459), 'GSM-7', 459, 3], ['460 letters', A(460), 'GSM-7', 460, 4], ['612 letters', A(612), 'GSM-7', 612, 4], ['613 letters', A(613), 'GSM-7', 613, 5],
  ['80 euro signs', '€'.repeat(80), 'GSM-7', 160, 1], ['81 euro signs', '€'.repeat(81), 'GSM-7', 162, 2],
  ['an escape pair that fits', `${A(152)}€${A(151)}`, 'GSM-7', 305, 2], ['an escape pair that may not be split', `${A(152)}€${A(152)}`, 'GSM-7', 306, 3],
  ['a curly apostrophe and 69 letters', `\u2019${A(69)}`, 'UCS-2', 70, 1], ['a curly apostrophe and 70 letters', `\u2019${A(70)}`, 'UCS-2', 71, 2],
  ['a curly apostrophe and 133 letters', `\u2019${A(133)}`, 'UCS-2', 134, 2], ['a curly apostrophe and 134 letters', `\u2019${A(134)}`, 'UCS-2', 135, 3],
  ['35 emoji', '😀'.repeat(35), 'UCS-2', 70, 1], ['36 emoji', '😀'.repeat(36), 'UCS-2', 72, 2],
  ['201 Polish letters', 'ł'.repeat(201), 'UCS-2', 201, 3], ['202 Polish letters', 'ł'.repeat(202), 'UCS-2', 202, 4], ['70 Arabic letters', 'ب'.repeat(70), 'UCS-2', 70, 1],
  ['a reminder with a straight apostrophe', 'Reminder: your appointment is on Tue 12 May 2026 at 09:40. Don\'t forget.', 'GSM-7', 72, 1],
  ['a reminder with a curly apostrophe', 'Reminder: your appointment is on Tue 12 May 2026 at 09:40. Don\u2019t forget.', 'UCS-2', 72, 2],
]

/** The default alphabet as 3GPP TS 23.038 prints it, and its extension; from memory, written apart from the code. */
const basic = '@£$¥èéùìòÇ\nØø\rÅåΔ_ΦΓΛΩΠΨΣΘΞÆæßÉ !"#¤%&\'()*+,-./0123456789:;<=>?¡ABCDEFGHIJKLMNOPQRSTUVWXYZÄÖÑÜ§¿abcdefghijklmnopqrstuvwxyzäöñüà'
const extension = '\f^{}\\[~]|€'

/** A second count: characters one by one into parts, nothing shared with the code under test. */
function countAgain(text: string): { units: number, parts: number } {
  const characters = [...text]
  const gsm = characters.every(character => basic.includes(character) || extension.includes(character))
  const cost = (character: string) => gsm ? (extension.includes(character) ? 2 : 1) : character.length
  const units = characters.reduce((sum, character) => sum + cost(character), 0)
  if (units <= (gsm ? 160 : 70)) return { units, parts: text === '' ? 0 : 1 }
  let parts = 1
  let filled = 0
  for (const character of characters) {
    if (filled + cost(character) > (gsm ? 153 : 67)) {
      parts += 1
      filled = 0
    }
    filled += cost(character)
  }
  return { units, parts }
}

describe('length of a text', () => {
  it.each(vectors)('%s', (_, text, encoding, units, parts) => {
    expect(measureText(text)).toMatchObject({ encoding, units, parts })
    expect(countAgain(text)).toEqual({ units, parts })
  })

  it.each([...basic].filter(character => character !== '\r'))('%j is one unit of the default alphabet', (character) => {
    expect(measureText(character)).toMatchObject({ encoding: 'GSM-7', units: 1, costlyCharacters: [] })
  })

  it.each([...extension])('%j is an escape pair', (character) => {
    expect(measureText(character)).toMatchObject({ encoding: 'GSM-7', units: 2 })
  })

  // Outside the alphabet of 3GPP TS 23.038: a-acute, backtick, small c-cedilla, typographic signs, most letters of Europe.
  it.each([...'á`ç\u2018\u2019\u201c\u201d–—…őłşžŵŷ'])('%j forces 16 bits', (character) => {
    expect(measureText(`A${character}A`)).toMatchObject({ encoding: 'UCS-2', units: 3, costlyCharacters: [character] })
  })

  it('agrees with the second count for any text of single letters', () => {
    const letter = fc.constantFrom(...basic.replace(/[\r\n]/g, ''), ...extension.replace('\f', ''))
    const wide = fc.constantFrom('ł', 'ب', 'я', '\u2019', 'ç')
    fc.assert(fc.property(fc.array(fc.oneof({ weight: 20, arbitrary: letter }, { weight: 1, arbitrary: wide }), { maxLength: 700, size: 'max' }), (letters) => {
      const text = letters.join('')
      expect(measureText(text)).toMatchObject(countAgain(text))
    }), { numRuns: 100 })
    fc.assert(fc.property(fc.array(letter, { minLength: 140, maxLength: 500, size: 'max' }), (letters) => {
      const text = letters.join('')
      expect(measureText(text)).toMatchObject({ encoding: 'GSM-7', ...countAgain(text) })
    }), { numRuns: 100 })
  }, 30_000)

  it('says how much shorter would save a part, and what is left', () => {
    expect(measureText(A(180))).toMatchObject({ parts: 2, unitsToSaveAPart: 20, unitsLeft: 126 })
    expect(measureText(A(160 - 20))).toMatchObject({ parts: 1, unitsToSaveAPart: 0, unitsLeft: 20 })
    expect(measureText('ł'.repeat(60))).toMatchObject({ parts: 1, unitsLeft: 10 })
    expect(measureText('ł'.repeat(100))).toMatchObject({ parts: 2, unitsLeft: 34, unitsToSaveAPart: 30 })
    expect(measureText('ł'.repeat(140))).toMatchObject({ parts: 3, unitsLeft: 61, unitsToSaveAPart: 6 })
    expect(measureText('')).toEqual({ encoding: 'GSM-7', units: 0, parts: 0, unitsLeft: 160, unitsToSaveAPart: 0, costlyCharacters: [] })
    expect(measureText('łął').costlyCharacters).toEqual(['ł', 'ą'])
    expect(measureText(A(310))).toMatchObject({ parts: 3, unitsToSaveAPart: 4 })
    fc.assert(fc.property(fc.integer({ min: 1, max: 700 }), (count) => {
      const { parts, unitsToSaveAPart, unitsLeft } = measureText(A(count))
      if (parts > 1) {
        expect(measureText(A(count - unitsToSaveAPart)).parts).toBe(parts - 1)
        expect(measureText(A(count - unitsToSaveAPart + 1)).parts).toBe(parts)
        expect(measureText(A(count + unitsLeft + 1)).parts).toBe(parts + 1)
      }
      expect(measureText(A(count + unitsLeft)).parts).toBe(parts)
    }))
  })
})

describe('built-in texts on the network', () => {
  const values = { date: 'Wednesday 14 October', time: '09:40', place: 'Ferncombe, door C', phone: '01632 960118', link: 'https://example.org/p/7f3k', urgency: 'This week', number: 'E-1042' }

  it.each(messageKinds)('%s in English is one part of plain characters with usual values, two where it also leads to the patient\'s page', (kind) => {
    const { text } = renderTemplate({ kind, channel: 'text', language: 'en', values })
    expect(measureText(text)).toMatchObject({ encoding: 'GSM-7', parts: kind === 'dayone.evening' ? 2 : 1 })
  })

  it('takes at most four parts in any language', () => {
    for (const kind of messageKinds.filter(each => reminderRules[each].audience === 'patient')) {
      for (const language of languages) expect(measureText(renderTemplate({ kind, channel: 'text', language, values }).text).parts, `${kind} ${language}`).toBeLessThanOrEqual(4)
    }
  })
})

describe('plain punctuation', () => {
  it('turns typographic signs into plain ones and so halves the price', () => {
    expect(plainPunctuation('“Don’t forget” – we’re open… \u00a0now')).toBe('"Don\'t forget" - we\'re open...  now')
    expect(measureText(plainPunctuation('Don’t – “forget”…')).encoding).toBe('GSM-7')
  })

  it('never alters names or letters', () => {
    expect(plainPunctuation('Ask for Siân O’Hara’s nurse’s room', ['Siân O’Hara'])).toBe('Ask for Siân O’Hara\'s nurse\'s room')
    expect(plainPunctuation('O’Hara’s and O’Hara', ['O’Hara', 'O’Hara’s', ''])).toBe('O’Hara’s and O’Hara')
    expect(plainPunctuation('a.c’ abc’', ['a.c’'])).toBe('a.c’ abc\'')
    expect(plainPunctuation('Żółw Łódź Ŵyn ça')).toBe('Żółw Łódź Ŵyn ça')
    fc.assert(fc.property(fc.string({ unit: 'grapheme', minLength: 1 }), fc.string({ unit: 'grapheme' }), fc.string({ unit: 'grapheme' }), (name, before, after) => {
      expect(plainPunctuation(`${before}${name}${after}`, [name])).toContain(name)
    }))
  })

  it('changes nothing a second time', () => {
    fc.assert(fc.property(fc.string({ unit: 'grapheme' }), (text) => {
      expect(plainPunctuation(plainPunctuation(text))).toBe(plainPunctuation(text))
    }))
  })
})
