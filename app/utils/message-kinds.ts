/** What a message is, in the words of the clinic. */
const kindWords: Record<string, string> = {
  'surgery.reminder': 'Reminder of surgery', 'dayone.evening': 'Evening text, day-one check', 'dayone.morning': 'Morning text, day-one check', 'visit.reminder': 'Reminder of a visit', 'visit.changed': 'A visit has a new time', 'visit.cancelled': 'A visit is cancelled',
  'safety.day3': 'Symptom check, day 3', 'safety.day7': 'Symptom check, day 7', 'drops.change': 'Drops step down', 'missing.patient': 'We expected you', 'reply.hand': 'Written by hand',
  'answer.confirmed': 'Answer: confirmed', 'answer.cannot-come': 'Answer: cannot come', 'answer.worried': 'Answer: worried', 'answer.which': 'Answer: which do you mean', 'answer.stopped': 'Answer: texts stopped', 'answer.started': 'Answer: texts started', 'answer.received': 'Answer: received',
}
export function messageKindWords(kind: string): string {
  return kindWords[kind] ?? 'Message'
}

const stateWords: Record<string, string> = { queued: 'to be sent', sending: 'being sent', sent: 'sent', delivered: 'delivered', failed: 'not delivered', expired: 'too late, not sent', withdrawn: 'withdrawn', held: 'to be rung' }
export function messageStateWords(state: string): string {
  return stateWords[state] ?? state
}
