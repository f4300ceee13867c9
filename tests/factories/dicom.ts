import dcmjs from 'dcmjs'

const { DicomMetaDictionary, DicomDict } = dcmjs.data
export const axialClass = '1.2.840.10008.5.1.4.1.1.78.7'
export const keratometryClass = '1.2.840.10008.5.1.4.1.1.78.3'
const explicitLittleEndian = '1.2.840.10008.1.2.1'

type Dataset = Record<string, unknown>
export interface FilePatient { PatientName: string, PatientBirthDate: string, PatientID: string }

const code = (CodeValue: string, CodingSchemeDesignator: string, CodeMeaning: string) => [{ CodeValue, CodingSchemeDesignator, CodeMeaning }]
const segment = (value: string, scheme: string, meaning: string, length: number) => ({ OphthalmicAxialLength: length, OphthalmicAxialLengthMeasurementsSegmentNameCodeSequence: code(value, scheme, meaning) })

/** One eye of an optical axial measurement as the standard lays it out: single readings, and what was selected. */
export function axialItem(lengthMm: number, change: Dataset = {}): Dataset {
  return {
    OpticalOphthalmicAxialLengthMeasurementsSequence: [-0.01, 0, 0.01].map(by => ({ OphthalmicAxialLengthMeasurementsType: 'TOTAL LENGTH', OphthalmicAxialLengthMeasurementsTotalLengthSequence: [{ OphthalmicAxialLength: lengthMm + by }] })),
    OpticalSelectedOphthalmicAxialLengthSequence: [{
      SelectedTotalOphthalmicAxialLengthSequence: [{ OphthalmicAxialLength: lengthMm }],
      SelectedSegmentalOphthalmicAxialLengthSequence: [segment('31636006', 'SCT', 'Anterior Chamber', 3.12), segment('111778', 'DCM', 'Single or Anterior Lens', 4.61)],
    }],
    ...change,
  }
}

export function axialData(patient: FilePatient, eyes: { right?: Dataset, left?: Dataset }, change: Dataset = {}): Dataset {
  return {
    SOPClassUID: axialClass, SOPInstanceUID: '2.25.1001', Modality: 'OAM', ContentDate: '20261130', SpecificCharacterSet: 'ISO_IR 192', ...patient, OphthalmicAxialMeasurementsDeviceType: 'OPTICAL',
    AnteriorChamberDepthDefinitionCodeSequence: code('111785', 'DCM', 'External Anterior Chamber Depth'),
    ...(eyes.right ? { OphthalmicAxialMeasurementsRightEyeSequence: [eyes.right] } : {}), ...(eyes.left ? { OphthalmicAxialMeasurementsLeftEyeSequence: [eyes.left] } : {}), ...change,
  }
}

export const keratometryItem = (flatD = 43.25, steepD = 44.1, flatAxis = 175, steepAxis = 85): Dataset => ({
  FlatKeratometricAxisSequence: [{ RadiusOfCurvature: 337.5 / flatD, KeratometricPower: flatD, KeratometricAxis: flatAxis }],
  SteepKeratometricAxisSequence: [{ RadiusOfCurvature: 337.5 / steepD, KeratometricPower: steepD, KeratometricAxis: steepAxis }],
})

export function keratometryData(patient: FilePatient, eyes: { right?: Dataset, left?: Dataset }, change: Dataset = {}): Dataset {
  return { SOPClassUID: keratometryClass, SOPInstanceUID: '2.25.1002', Modality: 'KER', ContentDate: '20261130', SpecificCharacterSet: 'ISO_IR 192', ...patient, ...(eyes.right ? { KeratometryRightEyeSequence: [eyes.right] } : {}), ...(eyes.left ? { KeratometryLeftEyeSequence: [eyes.left] } : {}), ...change }
}

/** The dataset as a file of DICOM part 10. */
export function dicomFile(dataset: Dataset, meta: { syntax?: string, mediaClass?: string } = {}): Uint8Array {
  const file = new DicomDict(DicomMetaDictionary.denaturalizeDataset({
    MediaStorageSOPClassUID: meta.mediaClass ?? dataset.SOPClassUID, MediaStorageSOPInstanceUID: dataset.SOPInstanceUID, TransferSyntaxUID: meta.syntax ?? explicitLittleEndian, ImplementationClassUID: '2.25.1000', ImplementationVersionName: 'TEST',
  }))
  file.dict = DicomMetaDictionary.denaturalizeDataset(dataset)
  return new Uint8Array(file.write() as ArrayBuffer)
}
