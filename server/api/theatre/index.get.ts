import { presentTheatreDay } from '#server/presenters/theatre'
import { getTheatreDay } from '#server/services/theatre/get-theatre-day'
import { defineStaffApi } from '#server/utils/api'
import { theatreDayQuery } from '#shared/contracts/theatre'

export default defineStaffApi({ query: theatreDayQuery }, async ({ ctx, query }) => presentTheatreDay(await getTheatreDay(ctx, query), ctx.actor, ctx.now))
