import dicomParser from 'dicom-parser'
import type { DataSet } from 'dicom-parser'
import { axialEye } from '#server/services/biometry/dicom-axial'
import { keratometryEye } from '#server/services/biometry/dicom-keratometry'
import { calendarDate, decoderFor, endOfElements, items, unreadable } from '#server/services/biometry/dicom-elements'
import type { DicomEye } from '#server/services/biometry/dicom-elements'
import { DomainError } from '#shared/domain/errors'
import type { Eye } from '#shared/domain/pathway/vocabulary'

/** The two storage classes that are read; PS3.4 B.5. */
export const dicomClasses = { '1.2.840.10008.5.1.4.1.1.78.7': 'axial', '1.2.840.10008.5.1.4.1.1.78.3': 'keratometry' } as const
export type DicomKind = typeof dicomClasses[keyof typeof dicomClasses]

const plainSyntaxes = ['1.2.840.10008.1.2', '1.2.840.10008.1.2.1']
const eyeSequences: Readonly<Record<DicomKind, Record<Eye, string>>> = {
  // Ophthalmic Axial Measurements Right / Left Eye Sequence, PS3.3 C.8.25.14; Keratometry Right / Left Eye Sequence, PS3.3 C.8.25.9.
  axial: { right: 'x00221007', left: 'x00221008' },
  keratometry: { right: 'x00460070', left: 'x00460071' },
}
const lateralities: Readonly<Record<string, readonly Eye[]>> = { R: ['right'], L: ['left'], B: ['right', 'left'] }

export interface DicomBiometry {
  kind: DicomKind
  patient: { name: string, birthDate: string | null, identifier: string }
  /** `YYYY-MM-DD`, when the file says. */
  measuredOn: string | null
  eyes: Partial<Record<Eye, DicomEye>>
}

/**
 * Reads one DICOM file of axial measurements or keratometry. Pure: bytes in, values out, or a refusal that names its reason. What the
 * file does not say is left out and said to be; nothing is guessed.
 */
export function readDicom(bytes: Uint8Array): DicomBiometry {
  const data = open(bytes)
  const kind = dicomClasses[(data.string('x00080016') ?? '') as keyof typeof dicomClasses]
  if (!kind) throw unreadable(`This is a DICOM file of another kind (${data.string('x00080016')?.slice(0, 64) ?? 'no SOP class'}). Axial measurements and keratometry are read.`, 'wrong-class')
  const header = data.string('x00020002')
  if (header && header !== data.string('x00080016')) throw unreadable('The header of the file and its content name different kinds.', 'wrong-class')
  const decode = decoderFor(data.string('x00080005'))
  return {
    kind,
    patient: { name: decode(data, 'x00100010'), birthDate: calendarDate(data.string('x00100030')), identifier: decode(data, 'x00100020') },
    measuredOn: calendarDate(data.string('x0008002a')?.slice(0, 8)) ?? calendarDate(data.string('x00080022')) ?? calendarDate(data.string('x00080023')),
    eyes: readEyes(data, kind),
  }
}

function readEyes(data: DataSet, kind: DicomKind): DicomBiometry['eyes'] {
  const found = Object.fromEntries((['right', 'left'] as const).map(eye => [eye, items(data, eyeSequences[kind][eye])])) as Record<Eye, DataSet[]>
  const present = (['right', 'left'] as const).filter(eye => found[eye].length > 0)
  if (!present.length) throw unreadable('The file does not say which eye was measured.', 'laterality')
  if (present.some(eye => found[eye].length > 1)) throw unreadable('The file holds one eye more than once.', 'laterality')
  const said = data.string('x00240113')
  if (said) {
    const eyes = lateralities[said]
    if (!eyes || eyes.length !== present.length || eyes.some(eye => !present.includes(eye))) throw unreadable(`The file says laterality ${said.slice(0, 16)}, but holds ${present.length === 2 ? 'both eyes' : `the ${present[0]} eye`}.`, 'laterality')
  }
  const read = kind === 'axial' ? axialEye : keratometryEye
  return Object.fromEntries(present.map(eye => [eye, read(data, found[eye][0] as DataSet)]))
}

function open(bytes: Uint8Array): DataSet {
  if (bytes.byteLength < 140 || String.fromCharCode(...bytes.subarray(128, 132)) !== 'DICM') throw unreadable('This is not a DICOM file.', 'wrong-type')
  try {
    const data = dicomParser.parseDicom(bytes, { inflater: () => {
      throw unreadable('The file is deflated. Export it without compression.', 'deflated')
    } })
    const syntax = data.string('x00020010') ?? ''
    if (!plainSyntaxes.includes(syntax)) throw unreadable('The file uses an encoding that is not read. Export it as Explicit VR Little Endian.', 'syntax')
    if (endOfElements(data) > bytes.byteLength) throw unreadable('The file ends too early, or says lengths that it does not have.', 'truncated')
    return data
  }
  catch (error) {
    if (error instanceof DomainError) throw error
    throw unreadable('The file ends too early, or is damaged.', 'truncated')
  }
}
