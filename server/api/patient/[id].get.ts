import { presentPatient } from '#server/presenters/patient'
import { getPatient } from '#server/services/patient/get-patient'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentPatient(await getPatient(ctx, params.id), ctx.actor, ctx.now))
