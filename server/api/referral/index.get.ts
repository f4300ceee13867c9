import { presentTriage } from '#server/presenters/triage'
import { listTriage, pageOfTriage } from '#server/services/referral/list-triage'
import { defineStaffApi } from '#server/utils/api'
import { triageQuery } from '#shared/contracts/referral'

export default defineStaffApi({ query: triageQuery }, async ({ ctx, query }) => presentTriage(await listTriage(ctx, query), pageOfTriage, ctx.actor, ctx.now))
