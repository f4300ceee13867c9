import { presentMerges } from '#server/presenters/patient-merge'
import { listMerges } from '#server/services/patient/list-merges'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentMerges(await listMerges(ctx, params.id)))
