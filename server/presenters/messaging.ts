import { mayWrite } from '#server/policies/messaging'
import type { LoadedConversation } from '#server/services/messaging/get-conversation'
import type { listGoingOut } from '#server/services/messaging/list-going-out'
import type { listReplies } from '#server/services/messaging/list-replies'
import type { Actor } from '#shared/domain/people/vocabulary'

export function presentReplies(found: Awaited<ReturnType<typeof listReplies>>, now: Date) {
  return {
    now: now.toISOString(),
    understood: found.understood,
    replies: found.replies.map(({ reply, patient, visit, escalation }) => ({
      id: reply.id, patientId: patient?.id ?? null, name: patient?.name ?? null, from: patient || !reply.fromNumber.startsWith('+') ? null : reply.fromNumber, words: reply.body, meaning: reply.meaning, receivedAt: reply.receivedAt.toISOString(),
      visitStartsAt: visit?.startsAt.toISOString() ?? null,
      escalation: escalation ? { urgency: escalation.urgency, raisedAt: escalation.raisedAt.toISOString(), acknowledged: escalation.state === 'acknowledged' } : null,
    })),
    stuck: found.stuck.map(({ message, patient }) => ({ id: message.id, patientId: patient.id, name: patient.name, phone: patient.phone, words: message.body, state: message.state, channel: message.channel, canSendAgain: message.state === 'failed' && message.expiresAt > now, why: message.lastError, createdAt: message.createdAt.toISOString() })),
  }
}
/** What each row was and when; the words stay in the conversation. */
export function presentGoingOut(found: Awaited<ReturnType<typeof listGoingOut>>, now: Date) {
  const last = found.rows.at(-1)?.message
  return {
    now: now.toISOString(), next: found.more && last ? `${last.dueAt.toISOString()}_${last.id}` : null,
    counts: Object.fromEntries(found.counts.map(each => [each.state, each.n])),
    items: found.rows.map(({ message, patient }) => ({ id: message.id, patientId: patient.id, name: patient.name, kind: message.kind, channel: message.channel, state: message.state, at: (message.sentAt ?? message.dueAt).toISOString(), why: message.lastError })),
  }
}
export type GoingOut = ReturnType<typeof presentGoingOut>

export type ReplyList = ReturnType<typeof presentReplies>

export function presentConversation(loaded: LoadedConversation, actor: Actor, now: Date) {
  const { patient, pathway, site, escalation } = loaded
  const may = mayWrite(actor, site.id)
  return {
    now: now.toISOString(),
    patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, phone: patient.phone, language: patient.language, preferredChannel: patient.preferredChannel, textsStopped: patient.textsStoppedAt !== null, consent: patient.messageConsent },
    eye: pathway.eye,
    surgeryAt: (pathway.operatedAt ?? pathway.surgeryAt)?.toISOString() ?? null,
    operated: pathway.operatedAt !== null,
    site: { name: site.name, phone: site.phone, zone: site.zone },
    escalation: escalation ? { urgency: escalation.urgency, raisedAt: escalation.raisedAt.toISOString(), acknowledged: escalation.state === 'acknowledged', sentence: escalation.reasons[0]?.sentence ?? '' } : null,
    sent: loaded.sent.map(row => ({
      id: row.id, kind: row.kind, channel: row.channel, state: row.state, canSendAgain: row.state === 'failed' && row.expiresAt > now, words: row.body, language: row.language, dueAt: row.dueAt.toISOString(), sentAt: row.sentAt?.toISOString() ?? null, deliveredAt: row.deliveredAt?.toISOString() ?? null, why: row.lastError,
      events: loaded.events.filter(event => event.messageId === row.id).map(event => ({ id: event.id, at: event.at.toISOString(), kind: event.kind, why: typeof event.detail.why === 'string' ? event.detail.why : null })),
    })),
    received: loaded.received.map(row => ({ id: row.id, words: row.body, meaning: row.meaning, receivedAt: row.receivedAt.toISOString(), handledAt: row.handledAt?.toISOString() ?? null, handledWords: row.handledWords })),
    visits: loaded.booked.map(row => ({ id: row.id, kind: row.kind, startsAt: row.startsAt.toISOString(), state: row.state })),
    abilities: { canWrite: may, canHandle: may },
  }
}
export type Conversation = ReturnType<typeof presentConversation>
