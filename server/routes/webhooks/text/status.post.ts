import { defineEventHandler } from 'h3'
import { recordReceipt } from '#server/services/messaging/record-receipt'
import { useDatabase } from '#server/db/client'
import { now } from '#server/utils/clock'
import { readSignedForm } from '#server/utils/signed-form'
import { problemOf, sendProblem } from '#server/utils/problem'

// Public: the text provider calls it and proves itself by its signature.
export default defineEventHandler(async (event) => {
  try {
    const form = await readSignedForm(event)
    await recordReceipt({ db: useDatabase(), now: now() }, { providerId: form.MessageSid ?? '', status: form.MessageStatus ?? '', errorCode: form.ErrorCode, marker: new URL(event.path, 'http://own').searchParams.get('m') })
    return ''
  }
  catch (error) {
    return sendProblem(event, problemOf(error))
  }
})
