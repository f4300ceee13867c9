import { presentNote } from '#server/presenters/theatre'
import { amendOperationNote } from '#server/services/theatre/sign-operation-note'
import { defineStaffApi, idParams } from '#server/utils/api'
import { amendNoteBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: amendNoteBody }, async ({ ctx, params, body }) => presentNote(await amendOperationNote(ctx, { ...body, pathwayId: params.id }), ctx.actor.name))
