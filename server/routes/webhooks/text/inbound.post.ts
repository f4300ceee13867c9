import { defineEventHandler, setResponseHeader } from 'h3'
import { useDatabase } from '#server/db/client'
import { receiveText } from '#server/services/messaging/receive-text'
import { now } from '#server/utils/clock'
import { problemOf, sendProblem } from '#server/utils/problem'
import { readSignedForm } from '#server/utils/signed-form'

// Public: the text provider calls it and proves itself by its signature. Answers leave as messages of our own, not in this reply.
export default defineEventHandler(async (event) => {
  try {
    const form = await readSignedForm(event)
    await receiveText({ db: useDatabase(), now: now() }, { providerId: form.MessageSid ?? '', from: form.From ?? '', body: form.Body ?? '' })
    setResponseHeader(event, 'content-type', 'text/xml')
    return '<?xml version="1.0" encoding="UTF-8"?><Response></Response>'
  }
  catch (error) {
    return sendProblem(event, problemOf(error))
  }
})
