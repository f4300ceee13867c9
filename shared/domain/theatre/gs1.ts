import type { FieldProblem } from '#shared/domain/errors'
import { DomainError } from '#shared/domain/errors'

/**
 * Reading a lens label: GS1 element strings as a scanner types them, and the form that people read.
 *
 * GS1 General Specifications, from memory: section 3 (application identifiers), 7.8 (element strings, predefined lengths and FNC1),
 * 7.9 (check digit, modulo 10), 7.12 (century of a date), and the symbology identifiers of ISO/IEC 15424. Only what stands on a
 * lens box is kept; other known parts are read past, and a part that is not known stops the reading rather than being guessed.
 */
export interface LensLabel {
  /** Fourteen digits, check digit right. */
  gtin: string
  lot?: string
  /** `YYYY-MM-DD`: the last day of the month when the label names no day. */
  expiresOn?: string
  serial?: string
}

/** What separates a part of open length from the next, as scanners type FNC1 (ASCII 29). */
export const groupSeparator = '\u001D'
const symbologyIdentifiers = [']C1', ']d2', ']Q3', ']e0', ']J1']

type Kind = 'digits' | 'text'
interface Part { kind: Kind, length: number, isOpen: boolean, words: string }
const fixed = (length: number, words: string): Part => ({ kind: 'digits', length, isOpen: false, words })
const open = (length: number, words: string, kind: Kind = 'text'): Part => ({ kind, length, isOpen: true, words })

const knownParts: Readonly<Record<string, Part>> = {
  '00': fixed(18, 'shipping container number'), '01': fixed(14, 'item number'), '02': fixed(14, 'contained item number'),
  '10': open(20, 'lot'), '11': fixed(6, 'production date'), '12': fixed(6, 'due date'), '13': fixed(6, 'packaging date'), '15': fixed(6, 'best before date'), '16': fixed(6, 'sell by date'), '17': fixed(6, 'expiry date'),
  '20': fixed(2, 'variant'), '21': open(20, 'serial number'), '22': open(20, 'consumer product variant'), '30': open(8, 'count', 'digits'), '37': open(8, 'count', 'digits'),
  '240': open(30, 'additional item number'), '241': open(30, 'customer part number'), '250': open(30, 'secondary serial number'), '400': open(30, 'order number'), '410': fixed(13, 'ship to'), '414': fixed(13, 'location'), '422': fixed(3, 'country of origin'),
  '710': open(20, 'reimbursement number'), '711': open(20, 'reimbursement number'), '712': open(20, 'reimbursement number'), '713': open(20, 'reimbursement number'), '714': open(20, 'reimbursement number'),
  '7003': fixed(10, 'expiry date and time'), '8008': open(12, 'production date and time', 'digits'), '8020': open(25, 'payment slip reference'),
}
for (let company = 90; company <= 99; company++) Object.assign(knownParts, { [String(company)]: open(90, 'company part') })

/** Character set 82 of the General Specifications (figure 7.11-1), from memory. */
const textCharacters = /^[!"%&'()*+,\-./0-9:;<=>?A-Z_a-z]+$/

/** @throws DomainError `theatre.label-invalid` with the field `label` and what is wrong with it. `today` (YYYY-MM-DD) decides the century of a date. */
export function readLensLabel(typed: string, today: string): LensLabel {
  const parts = new Map<string, string>()
  for (const [identifier, value] of isHumanForm(typed) ? humanParts(typed) : scannedParts(typed)) {
    if (parts.has(identifier) && parts.get(identifier) !== value) refuse('repeated', `The label says ${wordsOf(identifier)} twice, and not the same.`)
    parts.set(identifier, value)
  }
  const gtin = parts.get('01')
  if (gtin === undefined) refuse('required', 'The label holds no item number (01). Type model and power, two people.')
  if (!hasRightCheckDigit(gtin!)) refuse('check-digit', 'The check digit of the item number is wrong. Scan again.')
  const expiry = parts.get('17')
  return {
    gtin: gtin!,
    ...(parts.has('10') ? { lot: parts.get('10')! } : {}),
    ...(expiry ? { expiresOn: dateOf(expiry, today) } : {}),
    ...(parts.has('21') ? { serial: parts.get('21')! } : {}),
  }
}

const isHumanForm = (typed: string) => typed.trim().startsWith('(')

/** `(01)04012345678901(17)290331(10)AB12`: brackets are for people and stand in no symbol. */
function humanParts(typed: string): [string, string][] {
  const found: [string, string][] = []
  let rest = typed.trim()
  while (rest) {
    const match = /^\((\d{2,4})\)(.*?)(?=\(\d{2,4}\)|$)/s.exec(rest)
    if (!match) refuse('form', 'The brackets of this label do not fit. Each number in brackets is followed by its value.')
    const [whole, identifier, value] = match! as unknown as [string, string, string]
    found.push([identifier, checked(identifier, value.trim())])
    rest = rest.slice(whole.length).trim()
  }
  return found
}

function scannedParts(typed: string): [string, string][] {
  // A scanner ends with Enter or Tab; some say first which kind of symbol it was.
  let rest = typed.replace(/[\r\n\t]+$/, '').replace(/^ +| +$/g, '')
  const symbol = symbologyIdentifiers.find(each => rest.startsWith(each))
  if (symbol) rest = rest.slice(symbol.length)
  if (!rest) refuse('required', 'Nothing was read. Scan again.')
  const found: [string, string][] = []
  while (rest) {
    if (rest.startsWith(groupSeparator)) {
      rest = rest.slice(1)
      continue
    }
    const identifier = [2, 3, 4].map(length => rest.slice(0, length)).find(each => each in knownParts)
    if (!identifier) refuse('unknown-part', `The label goes on with “${rest.slice(0, 4)}”, which is no part that is known here. Scan again, or type model and power.`)
    const part = knownParts[identifier!]!
    const body = rest.slice(identifier!.length)
    const end = body.indexOf(groupSeparator)
    const value = part.isOpen ? (end < 0 ? body : body.slice(0, end)) : body.slice(0, part.length)
    found.push([identifier!, checked(identifier!, value)])
    rest = body.slice(value.length)
  }
  return found
}

function checked(identifier: string, value: string): string {
  const part = knownParts[identifier]
  if (!part) refuse('unknown-part', `(${identifier}) is no part that is known here.`)
  const { kind, length, isOpen, words } = part!
  if (isOpen ? value.length < 1 || value.length > length : value.length !== length) refuse('length', `The ${words} (${identifier}) must have ${isOpen ? `1 to ${length}` : length} characters and has ${value.length}.`)
  if (kind === 'digits' ? !/^\d+$/.test(value) : !textCharacters.test(value)) refuse('characters', `The ${words} (${identifier}) holds a character that cannot stand there.`)
  return value
}

/**
 * `YYMMDD` as a day. The century is the one that brings the year nearest to the present (General Specifications, section 7.12: 51 to
 * 99 years ahead means the last century, 50 to 99 behind the next). A day of 00 means the last of the month.
 */
function dateOf(value: string, today: string): string {
  const [year2, month, day] = [Number(value.slice(0, 2)), Number(value.slice(2, 4)), Number(value.slice(4, 6))]
  const thisYear = Number(today.slice(0, 4))
  const ahead = year2 - thisYear % 100
  const century = Math.floor(thisYear / 100) + (ahead >= 51 ? -1 : ahead <= -50 ? 1 : 0)
  const year = century * 100 + year2
  const lastDay = [31, year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0) ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31][month - 1]
  if (!lastDay || day > lastDay) refuse('date', 'The expiry date (17) is no day of the calendar. Scan again.')
  return `${year}-${String(month).padStart(2, '0')}-${String(day || lastDay!).padStart(2, '0')}`
}

/** The last digit of a GS1 number makes the weighted sum (3, 1, 3, 1 ... from the right of the others) a multiple of ten: section 7.9. */
export function checkDigitOf(digits: string): number {
  const sum = [...digits].reverse().reduce((sofar, digit, index) => sofar + Number(digit) * (index % 2 ? 1 : 3), 0)
  return (10 - sum % 10) % 10
}
export const withCheckDigit = (digits: string) => `${digits}${checkDigitOf(digits)}`
export const hasRightCheckDigit = (number: string) => /^\d{2,}$/.test(number) && checkDigitOf(number.slice(0, -1)) === Number(number.slice(-1))

const wordsOf = (identifier: string) => knownParts[identifier]?.words ?? identifier

function refuse(code: FieldProblem['code'], message: string): never {
  throw new DomainError('theatre.label-invalid', message, { fields: [{ field: 'label', code, message }] })
}
