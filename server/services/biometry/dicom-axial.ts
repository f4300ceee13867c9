import type { DataSet } from 'dicom-parser'
import { codeOf, items, numberOf, only, unreadable } from '#server/services/biometry/dicom-elements'
import type { DicomEye } from '#server/services/biometry/dicom-elements'

const length = 'x00221019'
/** CID 4233, Ophthalmic Axial Length Measurements Segment Name: SNOMED CT and its older codes, and DICOM's own for the lens. */
const segments: Readonly<Record<string, 'cornea' | 'chamber' | 'lens'>> = { '28726007': 'cornea', 'T-AA200': 'cornea', '31636006': 'chamber', 'T-AA050': 'chamber', '111778': 'lens' }
const repeatsForSpread = 3
const rounded = (value: number, digits: number) => Number(value.toFixed(digits))

/**
 * One eye of an Ophthalmic Axial Measurements object: PS3.3 C.8.25.14 with its macros. The length is the one that the device or its
 * user selected; the spread is worked out from the single readings when there are three or more.
 */
export function axialEye(data: DataSet, eye: DataSet): DicomEye {
  const notes: string[] = []
  const optical = only(eye, 'x00221255')
  const selected = only(optical, 'x00221260') ?? optical ?? only(eye, 'x00221230')
  const axialLengthMm = numberOf(selected, length)
  if (axialLengthMm === undefined) throw unreadable('No axial length was selected on the device.', 'required')
  const segmental = new Map(items(optical, 'x00221257').flatMap((item) => {
    const name = segments[codeOf(item, 'x00221101')?.value ?? '']
    const value = numberOf(item, length)
    return name && value !== undefined ? [[name, value] as const] : []
  }))
  const spread = spreadOf(readings(eye))
  const chamber = depthOf(codeOf(data, 'x00221125')?.meaning ?? '', segmental, notes)
  const lens = segmental.get('lens')
  return {
    values: {
      axialLengthMm: rounded(axialLengthMm, 3), ...(spread === undefined ? {} : { axialLengthSdMm: rounded(spread, 4) }),
      ...(chamber === undefined ? {} : { anteriorChamberDepthMm: rounded(chamber, 3) }), ...(lens === undefined ? {} : { lensThicknessMm: rounded(lens, 3) }),
    },
    notes: [...notes, ...(spread === undefined ? ['The file holds fewer than three single readings: no spread of the axial length.'] : [])],
  }
}

/**
 * External depth, from the front of the cornea: as given when the file says so, or from both parts when it says internal. The
 * segment named "anterior chamber" alone does not say from where it was measured.
 */
function depthOf(definition: string, segmental: Map<string, number>, notes: string[]): number | undefined {
  const chamber = segmental.get('chamber')
  if (chamber === undefined) return undefined
  if (definition.includes('external')) return chamber
  const cornea = segmental.get('cornea')
  if (definition.includes('internal') && cornea !== undefined) {
    notes.push('Chamber depth: cornea and inner depth of the file, added.')
    return chamber + cornea
  }
  notes.push(`The file holds a chamber depth of ${rounded(chamber, 2)} mm, but not from where it was measured: read it from the printout.`)
  return undefined
}

/** Every single total length, whatever the type of device. */
function readings(eye: DataSet): number[] {
  const measured = [...items(eye, 'x00221050'), ...items(eye, 'x00221225'), ...items(eye, 'x00221220')]
  return measured.flatMap((item) => {
    const totals = [...items(item, 'x00221210'), ...items(item, 'x00221050').flatMap(each => items(each, 'x00221210'))]
    return totals.flatMap(total => numberOf(total, length) ?? [])
  })
}

function spreadOf(values: readonly number[]): number | undefined {
  if (values.length < repeatsForSpread) return undefined
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1))
}
