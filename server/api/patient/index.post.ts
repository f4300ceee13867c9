import { addPatient } from '#server/services/patient/add-patient'
import { defineStaffApi } from '#server/utils/api'
import { addPatientBody } from '#shared/contracts/patient'

export default defineStaffApi({ body: addPatientBody }, async ({ ctx, body }) => {
  const { patientId, pathwayIds } = await addPatient(ctx, body)
  return { patientId, pathwayIds }
})
