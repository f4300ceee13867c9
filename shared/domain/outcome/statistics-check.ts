import { DomainError } from '#shared/domain/errors'

/** @throws DomainError `outcome.count-invalid` unless both are whole numbers and 0 <= events <= eyes */
export function checkCounts(events: number, eyes: number): void {
  if (Number.isSafeInteger(events) && Number.isSafeInteger(eyes) && events >= 0 && events <= eyes) return
  throw new DomainError('outcome.count-invalid', 'Events are a whole number from 0 up to the number of eyes.', {
    fields: [{ field: 'events', code: 'out-of-range', message: `${events} of ${eyes} cannot be counted.`, limit: '0 to the number of eyes' }],
  })
}

/** @throws DomainError `outcome.probability-invalid` unless strictly between 0 and 1 */
export function checkProbability(field: string, probability: number): void {
  if (probability > 0 && probability < 1) return
  throw new DomainError('outcome.probability-invalid', 'A chance lies between 0 and 1.', {
    fields: [{ field, code: 'out-of-range', message: 'Enter a value above 0 and below 1.', limit: '0 to 1' }],
  })
}

/** @throws DomainError `outcome.setting-invalid` unless a number above 0 */
export function checkPositive(field: string, value: number): void {
  if (value > 0 && Number.isFinite(value)) return
  throw new DomainError('outcome.setting-invalid', 'This setting must be above 0.', {
    fields: [{ field, code: 'out-of-range', message: 'Enter a number above 0.', limit: 'above 0' }],
  })
}

/** A gap in a series is told, never filled with 0. @throws DomainError `outcome.value-missing` with its place */
export function checkSeries(values: readonly number[]): void {
  const index = values.findIndex(value => !Number.isFinite(value))
  if (index < 0) return
  throw new DomainError('outcome.value-missing', 'A value in the series is missing or is not a number.', {
    fields: [{ field: `values.${index}`, code: 'required', message: 'Leave this eye out and count it as missing, or enter its value.' }],
  })
}
