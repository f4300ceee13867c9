import { presentImportRows } from '#server/presenters/referral-import'
import { listImportRows } from '#server/services/referral/list-imports'
import { defineStaffApi, idParams } from '#server/utils/api'
import { importRowsQuery } from '#shared/contracts/referral-import'

export default defineStaffApi({ params: idParams, query: importRowsQuery }, async ({ ctx, params, query }) => presentImportRows(await listImportRows(ctx, params.id, query)))
