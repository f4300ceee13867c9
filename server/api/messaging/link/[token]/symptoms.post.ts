import { answerSymptoms } from '#server/services/messaging/answer-symptoms'
import { definePublicApi } from '#server/utils/api'
import { readLinkId } from '#server/utils/link-session'
import { linkParams, symptomsBody } from '#shared/contracts/messaging'

// Public: the sealed cookie of this link stands for the patient.
export default definePublicApi({ params: linkParams, body: symptomsBody }, async ({ ctx, params, body, event }) =>
  answerSymptoms(ctx, { token: params.token, linkId: await readLinkId(event), symptoms: body.symptoms, words: body.words }))
