import { findPatients } from '#server/services/patient/find-patients'
import { defineStaffApi } from '#server/utils/api'
import { findPatientsQuery } from '#shared/contracts/patient'

export default defineStaffApi({ query: findPatientsQuery }, async ({ ctx, query }) => ({ items: await findPatients(ctx, query.find) }))
