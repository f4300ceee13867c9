import type { DataSet } from 'dicom-parser'
import type { EyeMeasures } from '#shared/contracts/biometry'
import { DomainError } from '#shared/domain/errors'

/** What a file says of one eye, and what a person should know about it. */
export interface DicomEye { values: Partial<EyeMeasures>, notes: string[] }

export const unreadable = (message: string, code = 'unreadable') => new DomainError('biometry.invalid', message, { fields: [{ field: 'file', code, message }] })

const maxDepth = 24

/** The items of a sequence; none when it is absent or empty. */
export function items(data: DataSet | undefined, tag: string): DataSet[] {
  return (data?.elements[tag]?.items ?? []).flatMap(item => item.dataSet ? [item.dataSet] : [])
}

export function only(data: DataSet | undefined, tag: string): DataSet | undefined {
  return items(data, tag)[0]
}

/** A number of VR FL or FD (4 or 8 bytes); not a number when it is there and is none. */
export function numberOf(data: DataSet | undefined, tag: string): number | undefined {
  const element = data?.elements[tag]
  if (!data || !element || element.length === 0) return undefined
  if (element.length === 4) return data.float(tag)
  return element.length === 8 ? data.double(tag) : Number.NaN
}

/** The first item of a code sequence, PS3.3 8.8. */
export function codeOf(data: DataSet | undefined, tag: string): { value: string, scheme: string, meaning: string } | undefined {
  const item = only(data, tag)
  return item && { value: item.string('x00080100') ?? '', scheme: item.string('x00080102') ?? '', meaning: (item.string('x00080104') ?? '').toLowerCase() }
}

/** `19490312` as `1949-03-12`, when it is a day of the calendar. */
export function calendarDate(given: string | undefined): string | null {
  const parts = /^(\d{4})\.?(\d{2})\.?(\d{2})$/.exec(given?.trim() ?? '')
  if (!parts) return null
  const [year, month, day] = parts.slice(1).map(Number) as [number, number, number]
  const at = new Date(Date.UTC(year, month - 1, day))
  return at.getUTCMonth() === month - 1 && at.getUTCDate() === day && year >= 1850 ? `${parts[1]}-${parts[2]}-${parts[3]}` : null
}

/** Text elements in the file's character set, PS3.3 C.12.1.1.2. A set that is not known here reads as Latin 1 and will match nobody by chance. */
export function decoderFor(characterSet: string | undefined): (data: DataSet, tag: string) => string {
  const decoder = new TextDecoder(characterSet === 'ISO_IR 192' ? 'utf-8' : 'latin1')
  return (data, tag) => {
    const element = data.elements[tag]
    if (!element || element.length > 400) return ''
    return decoder.decode(data.byteArray.subarray(element.dataOffset, element.dataOffset + element.length)).replace(/\0/g, '').trim()
  }
}

/** Where the last element says that it ends: beyond the file when the file is cut short or says lengths that it does not have. */
export function endOfElements(data: DataSet, depth = 0): number {
  if (depth > maxDepth) return Number.POSITIVE_INFINITY
  let end = 0
  for (const element of Object.values(data.elements)) {
    end = Math.max(end, element.dataOffset + (element.hadUndefinedLength ? 0 : element.length))
    for (const item of element.items ?? []) if (item.dataSet) end = Math.max(end, item.dataOffset + (item.hadUndefinedLength ? 0 : item.length), endOfElements(item.dataSet, depth + 1))
  }
  return end
}
