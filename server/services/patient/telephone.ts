import { parsePhoneNumberFromString } from 'libphonenumber-js/min'
import { DomainError } from '#shared/domain/errors'

/** A telephone number as it is stored and dialled (`+447700900123`), from what was typed; national numbers are British. */
export function telephoneFrom(typed: string | null, field: string): string | null {
  if (!typed) return null
  const number = parsePhoneNumberFromString(typed, 'GB')
  if (!number?.isPossible()) throw new DomainError('patient.invalid', 'The telephone number is not complete.', { fields: [{ field, code: 'not-a-number', message: 'Enter a telephone number such as 07700 900123.' }] })
  return number.number
}
