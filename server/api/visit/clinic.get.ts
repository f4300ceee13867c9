import { presentClinicDay } from '#server/presenters/visit'
import { getClinicDay } from '#server/services/visit/get-clinic-day'
import { defineStaffApi } from '#server/utils/api'
import { clinicDayQuery } from '#shared/contracts/visit'

export default defineStaffApi({ query: clinicDayQuery }, async ({ ctx, query }) => presentClinicDay(await getClinicDay(ctx, query), ctx.actor))
