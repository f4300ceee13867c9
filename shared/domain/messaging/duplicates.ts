import type { PlannedMessage } from '#shared/domain/messaging/reminder-plan'

/** Two messages that say the same this close together are one (common practice). */
export const duplicateWindowMinutes = 30

type Addressed = Pick<PlannedMessage, 'kind' | 'topic' | 'channel' | 'dueAt'> & { personId: string }

/**
 * Keeps the earlier of two messages that would reach the same person within 30 minutes saying the same (the same
 * topic). The text and the e-mail of one announcement belong together and are both kept; a call is never dropped.
 * A patient with two operated eyes so gets one symptom check, whose page asks about both.
 */
export function dropDuplicates<M extends Addressed>(messages: readonly M[]): { kept: M[], dropped: { message: M, sameAs: M }[] } {
  const kept: M[] = []
  const dropped: { message: M, sameAs: M }[] = []
  const inOrder = messages.map((message, index) => ({ message, index })).sort((a, b) => a.message.dueAt.getTime() - b.message.dueAt.getTime() || a.index - b.index)
  for (const { message } of inOrder) {
    const sameAs = kept.find(earlier => saysTheSame(earlier, message))
    if (sameAs) dropped.push({ message, sameAs })
    else kept.push(message)
  }
  return { kept, dropped }
}

function saysTheSame(a: Addressed, b: Addressed): boolean {
  if (a.channel === 'call' || b.channel === 'call') return false
  const apartMs = Math.abs(a.dueAt.getTime() - b.dueAt.getTime())
  const together = a.kind === b.kind && a.channel !== b.channel
  return a.personId === b.personId && a.topic === b.topic && apartMs <= duplicateWindowMinutes * 60_000 && !together
}
