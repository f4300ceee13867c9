import { presentAlike } from '#server/presenters/triage'
import { findAlikeOf } from '#server/services/referral/find-alike-of'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => presentAlike(await findAlikeOf(ctx, params.id)))
