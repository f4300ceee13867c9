import { proposeFromDicom } from '#server/services/biometry/propose-from-dicom'
import { defineStaffApi, idParams } from '#server/utils/api'
import { readUpload } from '#server/utils/upload'

const maxDicomBytes = 5_000_000

/** A device's DICOM file for the biometry form of this pathway. Answers what it proposes; nothing is saved. */
export default defineStaffApi({ params: idParams }, async ({ ctx, params, event }) => {
  const { bytes } = await readUpload(event, maxDicomBytes)
  const { eye, kind, measuredOn, values, notes, fellow } = await proposeFromDicom(ctx, { pathwayId: params.id, bytes })
  return { eye, kind, measuredOn, values, notes, fellow }
})
