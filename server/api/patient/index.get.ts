import { findPatients, pageOfPatients } from '#server/services/patient/find-patients'
import { defineStaffApi } from '#server/utils/api'
import { findPatientsQuery } from '#shared/contracts/patient'

export default defineStaffApi({ query: findPatientsQuery }, async ({ ctx, query }) => {
  const items = await findPatients(ctx, query)
  const last = items.length === pageOfPatients ? items.at(-1) : undefined
  return { items: items.map(({ id, name, recordNumber, birthDate }) => ({ id, name, recordNumber, birthDate })), next: last ? { afterName: last.name, afterId: last.id } : null }
})
