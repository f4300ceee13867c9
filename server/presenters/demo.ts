import type { unscopedReadDemo } from '#server/services/messaging/demo'

export function presentDemo(found: Awaited<ReturnType<typeof unscopedReadDemo>>) {
  return {
    now: found.now.toISOString(), connected: found.connected, mode: found.mode, failing: found.failing, refuseMail: found.refuseMail, line: found.line.map(each => ({ id: each.id, kind: each.kind, at: (each.sentAt ?? each.dueAt).toISOString(), sent: each.state === 'sent' || each.state === 'delivered' })), waiting: found.waiting, nextDueAt: found.nextDueAt?.toISOString() ?? null,
    phones: found.phones.map(phone => ({ number: phone.number, name: phone.name, isStaff: phone.isStaff, texts: phone.texts.map(text => ({ id: text.sid, words: text.body, received: text.direction === 'to-patient', status: text.status })) })),
    mails: found.mails.map(mail => ({ to: mail.to, subject: mail.subject, words: mail.text, at: mail.at, files: mail.attachments })),
  }
}
export type DemoState = ReturnType<typeof presentDemo>
