import { presentImports } from '#server/presenters/referral-import'
import { listImports } from '#server/services/referral/list-imports'
import { defineStaffApi } from '#server/utils/api'

export default defineStaffApi({}, async ({ ctx }) => presentImports(await listImports(ctx)))
