import type { DataSet } from 'dicom-parser'
import { numberOf, only, unreadable } from '#server/services/biometry/dicom-elements'
import type { DicomEye } from '#server/services/biometry/dicom-elements'
import { defaultKeratometricIndex } from '#shared/domain/biometry/vocabulary'

const rounded = (value: number, digits: number) => Number(value.toFixed(digits))
/** Powers and radii that fit no index between these do not belong to one another. */
const indexes = { min: 1.33, max: 1.345 }

interface Meridian { radiusMm: number | undefined, powerD: number, axisDegrees: number }

/** One eye of a Keratometry Measurements object, PS3.3 C.8.25.9: the flat meridian is K1, the steep one K2. */
export function keratometryEye(_data: DataSet, eye: DataSet): DicomEye {
  const flat = meridian(only(eye, 'x00460080'), 'flat')
  const steep = meridian(only(eye, 'x00460074'), 'steep')
  if (flat.powerD > steep.powerD) throw unreadable('The flat meridian of the file is stronger than its steep one.', 'out-of-range')
  const used = [flat, steep].flatMap(each => each.radiusMm ? [1 + each.powerD * each.radiusMm / 1000] : [])
  if (used.some(index => !(index >= indexes.min && index <= indexes.max))) throw unreadable('The powers and the radii of the file do not belong to one another.', 'out-of-range')
  const other = used.find(index => Math.abs(index - defaultKeratometricIndex) > 0.0015)
  return {
    values: { k1D: rounded(flat.powerD, 2), k1AxisDegrees: rounded(flat.axisDegrees, 1), k2D: rounded(steep.powerD, 2), k2AxisDegrees: rounded(steep.axisDegrees, 1) },
    notes: other === undefined ? [] : [`The device worked with an index of ${rounded(other, 4)}, not ${defaultKeratometricIndex}.`],
  }
}

function meridian(item: DataSet | undefined, name: string): Meridian {
  const powerD = numberOf(item, 'x00460076')
  const axisDegrees = numberOf(item, 'x00460077')
  if (powerD === undefined || axisDegrees === undefined) throw unreadable(`The ${name} meridian of the file has no power or no axis.`, 'required')
  return { radiusMm: numberOf(item, 'x00460075'), powerD, axisDegrees }
}
