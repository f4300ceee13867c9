import type { FieldProblem } from '#shared/domain/errors'

/** What a site asks of a patient's identifier: nothing, or the check digit of the NHS number of England, Wales and the Isle of Man. */
export const identifierChecks = ['none', 'nhs-number'] as const
export type IdentifierCheck = typeof identifierChecks[number]

/** As it is stored and compared: without the spaces, hyphens and dots that people group digits by. Letters in upper case. */
export function identifierFrom(given: string | null): string | null {
  return given?.replace(/[\s.-]/g, '').toUpperCase() || null
}

/**
 * The check digit of the first nine digits: each times its weight 10, 9 ... 2, the sum modulo 11 taken from 11; 11 is 0, and 10
 * is never issued (undefined). Source: NHS Data Model and Dictionary, attribute NHS NUMBER, "Modulus 11" algorithm.
 *
 * @param nine exactly nine digits
 */
export function nhsCheckDigit(nine: string): number | undefined {
  if (!/^\d{9}$/.test(nine)) return undefined
  const sum = [...nine].reduce((total, digit, index) => total + Number(digit) * (10 - index), 0)
  const digit = 11 - sum % 11
  return digit === 10 ? undefined : digit % 11
}

/** Ten digits of which the last is the check digit. Ten times the same digit passes the sum for some digits and is nobody's number. */
export function isNhsNumber(identifier: string): boolean {
  return /^\d{10}$/.test(identifier) && !/^(\d)\1{9}$/.test(identifier) && nhsCheckDigit(identifier.slice(0, 9)) === Number(identifier[9])
}

/** What is wrong with an identifier at this site, or undefined. A missing one is not wrong: not everybody has one at hand. */
export function identifierProblem(identifier: string | null, check: IdentifierCheck, field = 'identifier'): FieldProblem | undefined {
  if (identifier === null || check === 'none') return undefined
  if (!/^\d{10}$/.test(identifier)) return { field, code: 'wrong-form', message: 'An NHS number has ten digits.', limit: '10 digits' }
  if (!isNhsNumber(identifier)) return { field, code: 'check-digit', message: 'The last digit of this NHS number does not fit the others. Look for a mistyped or swapped digit.' }
  return undefined
}
