import { presentNote } from '#server/presenters/theatre'
import { signOperationNote } from '#server/services/theatre/sign-operation-note'
import { defineStaffApi, idParams } from '#server/utils/api'
import { signNoteBody } from '#shared/contracts/theatre'

export default defineStaffApi({ params: idParams, body: signNoteBody }, async ({ ctx, params, body }) => presentNote(await signOperationNote(ctx, { ...body, pathwayId: params.id }), ctx.actor.name))
