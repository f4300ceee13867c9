import { presentProposal } from '#server/presenters/booking'
import { proposeList } from '#server/services/visit/propose-list'
import { defineStaffApi } from '#server/utils/api'
import { proposalQuery } from '#shared/contracts/visit'

export default defineStaffApi({ query: proposalQuery }, async ({ ctx, query }) => presentProposal(await proposeList(ctx, query), ctx.actor))
