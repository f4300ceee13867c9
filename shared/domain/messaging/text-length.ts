import { SegmentedMessage } from 'sms-segments-calculator'

export interface TextLength {
  /** 7-bit default alphabet of 3GPP TS 23.038, or 16-bit units once a single character is outside it. */
  encoding: 'GSM-7' | 'UCS-2'
  /** Septets, or 16-bit units. */
  units: number
  /** Parts that are paid for; 0 for an empty text. */
  parts: number
  /** Units still free in the last part. */
  unitsLeft: number
  /** How many units fewer would save one part; 0 when there is only one. */
  unitsToSaveAPart: number
  /** The characters that force 16 bits, once each, in order. */
  costlyCharacters: string[]
}

/** Units of a text that fits in one part, and of each part of a longer one (its header takes the rest). */
export const partSizes = { 'GSM-7': { single: 160, joined: 153 }, 'UCS-2': { single: 70, joined: 67 } } as const

/**
 * How long a text is on the telephone network. An escaped character (`€`, `[`), an emoji and a letter with its vowel
 * signs are never split across parts, so a text can need one part more than its units suggest.
 */
export function measureText(text: string): TextLength {
  const message = new SegmentedMessage(text)
  const encoding = message.encodingName
  const sizes = partSizes[encoding]
  const units = message.encodedChars.reduce((sum, character) => sum + (character.codeUnits?.length ?? 0), 0)
  const parts = text === '' ? 0 : message.segmentsCount
  const lastBits = message.segments.at(-1)?.messageSizeInBits() ?? 0
  const used = Math.ceil(lastBits / (encoding === 'GSM-7' ? 7 : 16))
  return {
    encoding,
    units,
    parts,
    unitsLeft: (parts > 1 ? sizes.joined : sizes.single) - used,
    unitsToSaveAPart: parts < 2 ? 0 : Math.max(1, units - (parts === 2 ? sizes.single : (parts - 1) * sizes.joined)),
    costlyCharacters: [...new Set(message.getNonGsmCharacters())],
  }
}

/** Typographic signs that double the price of a text, and the plain ones that say the same. */
const plainSigns: Readonly<Record<string, string>> = {
  '\u2018': '\'', '\u2019': '\'', '\u201a': '\'', '\u201b': '\'', '\u2032': '\'', '`': '\'', '\u00b4': '\'',
  '\u201c': '"', '\u201d': '"', '\u201e': '"', '\u201f': '"', '\u2033': '"', '\u00ab': '"', '\u00bb': '"',
  '\u2010': '-', '\u2011': '-', '\u2012': '-', '\u2013': '-', '\u2014': '-', '\u2212': '-',
  '\u2026': '...', '\u00a0': ' ', '\u2009': ' ', '\u202f': ' ', '\u00ad': '', '\u200b': '', '\ufeff': '',
}

/**
 * Replaces typographic quotes, dashes, dots and spaces by plain ones. Letters are never touched, and nothing inside
 * `keep` is: a person's name or a place is written as its owner writes it, whatever it costs.
 */
export function plainPunctuation(text: string, keep: readonly string[] = []): string {
  const kept = keep.filter(name => name !== '').sort((a, b) => b.length - a.length)
  if (kept.length === 0) return replaceSigns(text)
  const pattern = new RegExp(`(${kept.map(name => name.replace(/[.*+?^${}()|[\]\\]/g, '\\$&')).join('|')})`)
  return text.split(pattern).map((piece, index) => index % 2 === 1 ? piece : replaceSigns(piece)).join('')
}

function replaceSigns(text: string): string {
  return [...text].map(sign => plainSigns[sign] ?? sign).join('')
}
