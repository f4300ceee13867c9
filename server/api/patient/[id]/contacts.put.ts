import { presentContacts } from '#server/presenters/patient'
import { changeContacts } from '#server/services/patient/change-contacts'
import { defineStaffApi, idParams } from '#server/utils/api'
import { contactsBody } from '#shared/contracts/patient'

export default defineStaffApi({ params: idParams, body: contactsBody }, async ({ ctx, params, body }) => presentContacts(await changeContacts(ctx, { ...body, patientId: params.id })))
