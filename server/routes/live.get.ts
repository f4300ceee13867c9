import { createEventStream, defineEventHandler } from 'h3'
import { hasRoleAt } from '#server/policies/scope'
import { subscribeLive } from '#server/utils/live'
import { problemOf, sendProblem } from '#server/utils/problem'
import { DomainError } from '#shared/domain/errors'

/** Server-Sent Events: topics and ids only, for the caller's sites. The page refetches through its own rights. */
export default defineEventHandler(async (event) => {
  const actor = event.context.actor
  if (!actor) return sendProblem(event, problemOf(new DomainError('people.not-signed-in', 'Sign in first.')))
  const stream = createEventStream(event)
  const unsubscribe = subscribeLive((note) => {
    if (note.siteId && !hasRoleAt(actor, note.siteId, 'coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead')) return
    void stream.push({ event: 'changed', data: JSON.stringify({ topic: note.topic, ids: note.ids }) })
  })
  const beat = setInterval(() => void stream.push({ event: 'beat', data: '1' }), 15_000)
  stream.onClosed(async () => {
    clearInterval(beat)
    unsubscribe()
    await stream.close()
  })
  void stream.push({ event: 'beat', data: '1' })
  return stream.send()
})
