import { deflateRawSync } from 'node:zlib'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { axialClass, axialData, axialItem, dicomFile, keratometryData, keratometryItem } from '#tests/factories/dicom'
import type { FilePatient } from '#tests/factories/dicom'
import { startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'
import { fileSender } from '#tests/support/send-file'

let product: Product
let pathwayId: string
let recordNumber: string
beforeAll(async () => {
  product = await startProduct()
  const { rows } = await product.pool.query('insert into patients (record_number, name, birth_date, site_id, created_at) values (\'TD1\', \'Zoë Aldermoor-Finch\', \'1947-09-19\', (select id from sites where code = \'ferncombe\'), now()) returning id, record_number')
  recordNumber = rows[0].record_number as string
  pathwayId = (await product.pool.query('insert into pathways (patient_id, eye, site_id, stage, referred_at, stage_since) select id, \'right\', site_id, \'biometry\', now(), now() from patients where id = $1 returning id', [rows[0].id])).rows[0].id as string
})
afterAll(() => product?.stop())

const patient = (change: Partial<FilePatient> = {}): FilePatient => ({ PatientName: 'Aldermoor-Finch^Zoë^^Mrs', PatientBirthDate: '19470919', PatientID: recordNumber, ...change })
const post = async (body: Uint8Array, who = 'ivo.hartnell', id = pathwayId) => (await fileSender(product, who))(`/api/biometry/${id}/dicom`, { body, type: 'application/dicom' })
const good = () => axialData(patient(), { right: axialItem(23.41) })
const stored = async () => (await product.pool.query('select (select count(*)::int from biometries where pathway_id = $1) b, (select count(*)::int from pathway_events where pathway_id = $1) e', [pathwayId])).rows[0] as { b: number, e: number }

test('a file of axial measurements is proposed for its eye, the other eye beside it, and nothing is saved', async () => {
  const answer = await post(dicomFile(axialData(patient(), { right: axialItem(23.41), left: axialItem(23.6) }, { MeasurementLaterality: 'B' })))
  expect(answer.status).toBe(200)
  expect(answer.body).toEqual({
    eye: 'right', kind: 'axial', measuredOn: '2026-11-30', notes: [], values: { axialLengthMm: 23.41, axialLengthSdMm: 0.01, anteriorChamberDepthMm: 3.12, lensThicknessMm: 4.61 },
    fellow: { values: { axialLengthMm: 23.6, axialLengthSdMm: 0.01, anteriorChamberDepthMm: 3.12, lensThicknessMm: 4.61 }, notes: [] },
  })
  expect(await stored()).toEqual({ b: 0, e: 0 })
})

test('a file of keratometry is proposed: the flat meridian as K1, the steep one as K2', async () => {
  const answer = await post(dicomFile(keratometryData(patient(), { right: keratometryItem(43.25, 44.1, 175, 85) })))
  expect(answer.body).toMatchObject({ kind: 'keratometry', values: { k1D: 43.25, k1AxisDegrees: 175, k2D: 44.1, k2AxisDegrees: 85 }, fellow: null })
})

test('ultrasound and implicit encoding are read; a depth without a definition is left to the printout', async () => {
  const ultrasound = axialData(patient(), { right: { UltrasoundSelectedOphthalmicAxialLengthSequence: [{ OphthalmicAxialLength: 24.02 }] } }, { OphthalmicAxialMeasurementsDeviceType: 'ULTRASOUND' })
  expect((await post(dicomFile(ultrasound))).body).toMatchObject({ values: { axialLengthMm: 24.02 } })
  const undefinedDepth = await post(dicomFile(axialData(patient(), { right: axialItem(23.41) }, { AnteriorChamberDepthDefinitionCodeSequence: [] })))
  expect(undefinedDepth.body.values).not.toHaveProperty('anteriorChamberDepthMm')
  expect(JSON.stringify(undefinedDepth.body.notes)).toContain('not from where it was measured')
})

const cut = (bytes: Uint8Array, by: number) => bytes.subarray(0, bytes.length - by)
/** The file with the length of one element, found by its tag in explicit little endian, said to be huge. */
function hugeLength(bytes: Uint8Array, group: number, element: number, longForm: boolean): Uint8Array {
  const copy = Buffer.from(bytes)
  const at = copy.indexOf(Buffer.from([group & 255, group >> 8, element & 255, element >> 8]), 140)
  if (longForm) copy.writeUInt32LE(0x7fffffff, at + 8)
  else copy.writeUInt16LE(0xfffe, at + 6)
  return copy
}
function deflated(bytes: Uint8Array): Uint8Array {
  const copy = Buffer.from(bytes)
  const syntax = copy.indexOf('1.2.840.10008.1.2.1')
  const named = Buffer.concat([copy.subarray(0, syntax), Buffer.from('1.2.840.10008.1.2.1.99'), copy.subarray(syntax + 20)])
  named.writeUInt16LE(22, syntax - 2)
  const groupLength = named.readUInt32LE(140)
  named.writeUInt32LE(groupLength + 2, 140)
  const start = 144 + groupLength + 2
  return Buffer.concat([named.subarray(0, start), deflateRawSync(named.subarray(start))])
}
function nested(depth: number): Uint8Array {
  const item = Buffer.from([0xfe, 0xff, 0x00, 0xe0, 0xff, 0xff, 0xff, 0xff])
  const sequence = Buffer.from([0x22, 0x00, 0x50, 0x12, 0x53, 0x51, 0, 0, 0xff, 0xff, 0xff, 0xff])
  return Buffer.concat([dicomFile(good()), ...Array.from({ length: depth }, () => Buffer.concat([sequence, item]))])
}

const malformed: [string, () => Uint8Array, string][] = [
  ['text that is no DICOM', () => Buffer.from('Axial length 23.41 mm, right eye, '.repeat(10)), 'wrong-type'],
  ['a picture', () => Buffer.concat([Buffer.from([0x89, 0x50, 0x4e, 0x47]), Buffer.alloc(400)]), 'wrong-type'],
  ['a head alone', () => Buffer.concat([Buffer.alloc(128), Buffer.from('DICM'), Buffer.alloc(20)]), 'truncated|wrong-class|syntax'],
  ['a file cut by ten bytes', () => cut(dicomFile(good()), 10), 'truncated'],
  ['a file cut in half', () => cut(dicomFile(good()), Math.floor(dicomFile(good()).length / 2)), 'truncated|wrong-class|laterality|required'],
  ['a length beyond the file', () => hugeLength(dicomFile(good()), 0x0010, 0x0010, false), 'truncated|wrong-class|laterality'],
  ['a sequence with a huge length', () => hugeLength(dicomFile(good()), 0x0022, 0x1007, true), 'truncated'],
  ['ten thousand nested sequences', () => nested(10_000), 'truncated'],
  ['a deflated file', () => deflated(dicomFile(good())), 'deflated'],
  ['big endian', () => dicomFile(good(), { syntax: '1.2.840.10008.1.2.2' }), 'truncated|syntax|wrong-class'],
  ['compressed pictures’ encoding', () => dicomFile(good(), { syntax: '1.2.840.10008.1.2.4.50' }), 'syntax'],
  ['a picture of the eye', () => dicomFile({ ...good(), SOPClassUID: '1.2.840.10008.5.1.4.1.1.77.1.5.1' }), 'wrong-class'],
  ['calculations of lenses', () => dicomFile({ ...good(), SOPClassUID: '1.2.840.10008.5.1.4.1.1.78.8' }), 'wrong-class'],
  ['a head that names another kind', () => dicomFile(keratometryData(patient(), { right: keratometryItem() }), { mediaClass: axialClass }), 'wrong-class'],
  ['no eye', () => dicomFile(axialData(patient(), {})), 'laterality'],
  ['keratometry without an eye', () => dicomFile(keratometryData(patient(), {})), 'laterality'],
  ['laterality against its content', () => dicomFile(axialData(patient(), { right: axialItem(23.41) }, { MeasurementLaterality: 'L' })), 'laterality'],
  ['both eyes, but said to be one', () => dicomFile(axialData(patient(), { right: axialItem(23.41), left: axialItem(23.5) }, { MeasurementLaterality: 'R' })), 'laterality'],
  ['one eye twice', () => dicomFile({ ...good(), OphthalmicAxialMeasurementsRightEyeSequence: [axialItem(23.41), axialItem(24.9)] }), 'laterality'],
  ['no selected length', () => dicomFile(axialData(patient(), { right: axialItem(23.41, { OpticalSelectedOphthalmicAxialLengthSequence: [] }) })), 'required'],
  ['an axial length of 2.3', () => dicomFile(axialData(patient(), { right: axialItem(2.3) })), 'unit-mix-up|out-of-range'],
  ['an axial length of 234', () => dicomFile(axialData(patient(), { right: axialItem(234) })), 'unit-mix-up|out-of-range'],
  ['a negative axial length', () => dicomFile(axialData(patient(), { right: axialItem(-23) })), 'out-of-range'],
  ['an axial length that is no number', () => dicomFile(axialData(patient(), { right: axialItem(Number.NaN) })), 'not-a-number'],
  ['an endless axial length', () => dicomFile(axialData(patient(), { right: axialItem(Number.POSITIVE_INFINITY) })), 'not-a-number'],
  ['an absurd other eye', () => dicomFile(axialData(patient(), { right: axialItem(23.41), left: axialItem(90) })), 'out-of-range'],
  ['a cornea of 12 D', () => dicomFile(keratometryData(patient(), { right: keratometryItem(12, 13) })), 'unit-mix-up|out-of-range'],
  ['a flat meridian stronger than the steep one', () => dicomFile(keratometryData(patient(), { right: keratometryItem(46, 43) })), 'out-of-range'],
  ['an axis of 270', () => dicomFile(keratometryData(patient(), { right: keratometryItem(43, 44, 270, 90) })), 'unit-mix-up|out-of-range'],
  ['radius and power that do not belong together', () => dicomFile(keratometryData(patient(), { right: { ...keratometryItem(), FlatKeratometricAxisSequence: [{ RadiusOfCurvature: 6.2, KeratometricPower: 43.25, KeratometricAxis: 175 }] } })), 'out-of-range'],
  ['no steep meridian', () => dicomFile(keratometryData(patient(), { right: { ...keratometryItem(), SteepKeratometricAxisSequence: [] } })), 'required'],
]

test.each(malformed)('%s is refused with its reason, and nothing is stored', async (_name, make, why) => {
  const before = await stored()
  const answer = await post(make())
  expect(answer.status).toBe(422)
  expect((answer.body.fields as { code: string }[])[0]?.code).toMatch(new RegExp(`^(${why})$`))
  expect(String(answer.body.title).length).toBeGreaterThan(15)
  expect(await stored()).toEqual(before)
})

test.each([
  ['another name', { PatientName: 'Aldermoor^Zelda' }, ['file.name']], ['another birth date', { PatientBirthDate: '19470920' }, ['file.birthDate']], ['another identifier', { PatientID: 'TD2' }, ['file.identifier']],
  ['no identifier', { PatientID: '' }, ['file.identifier']], ['no birth date', { PatientBirthDate: '' }, ['file.birthDate']], ['nobody at all', { PatientName: '', PatientBirthDate: '', PatientID: '' }, ['file.name', 'file.birthDate', 'file.identifier']],
])('a file of %s is refused with both people shown', async (_name, change, fields) => {
  const answer = await post(dicomFile(axialData(patient(change), { right: axialItem(23.41) })))
  expect(answer.status).toBe(422)
  expect(answer.body.code).toBe('biometry.other-patient')
  expect((answer.body.fields as { field: string }[]).map(each => each.field)).toEqual(fields)
  expect(answer.body.patient).toMatchObject({ name: 'Zoë Aldermoor-Finch', birthDate: '1947-09-19' })
  expect(answer.body.file).toHaveProperty('name')
})

test('a file of the other eye alone is refused with both eyes named', async () => {
  const answer = await post(dicomFile(axialData(patient(), { left: axialItem(23.41) })))
  expect(answer.body).toMatchObject({ status: 422, code: 'biometry.other-eye', file: { eye: 'left' }, pathway: { eye: 'right' } })
})

test('only who measures this eye may have a file read, and a larger file than 5 MB is refused', async () => {
  const file = dicomFile(good())
  expect((await post(file, 'corin.vellacott')).status).toBe(403)
  expect((await post(file, 'bryony.askerswell')).status).toBe(404)
  expect((await post(file, 'petra.lanyon')).status).toBe(404)
  expect((await post(Buffer.concat([file, Buffer.alloc(6_000_000)]))).status).toBe(413)
})
