import { presentLensPlan } from '#server/presenters/biometry'
import { signLensPlan } from '#server/services/biometry/sign-lens-plan'
import { defineStaffApi, idParams } from '#server/utils/api'
import { signLensPlanBody } from '#shared/contracts/biometry'

export default defineStaffApi({ params: idParams, body: signLensPlanBody }, async ({ ctx, params, body }) => presentLensPlan(await signLensPlan(ctx, { ...body, pathwayId: params.id }), ctx.actor.name))
