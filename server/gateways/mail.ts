import nodemailer from 'nodemailer'
import type { Transporter } from 'nodemailer'
import type { SendResult } from '#server/gateways/text'

export interface MailToSend { id: string, to: string, subject: string, body: string, calendar?: string | null }

let transport: Transporter | undefined

/** One pooled transport per process. The Message-ID is the message row's own id, so that a mail server can drop a second copy. */
export async function sendMail(mail: MailToSend): Promise<SendResult> {
  const url = process.env.DAWNWARD_MAIL_URL
  if (!url) return { outcome: 'refused', why: 'No mail server is set up.', permanent: true }
  transport ??= nodemailer.createTransport(`${url}${url.includes('?') ? '&' : '?'}pool=true&maxConnections=5&maxMessages=Infinity&connectionTimeout=8000&socketTimeout=15000`)
  try {
    const sent = await transport.sendMail({
      messageId: `<${mail.id}@dawnward.example.org>`, from: process.env.DAWNWARD_MAIL_FROM ?? 'Ferncombe Eye Unit <no-reply@example.org>', to: mail.to, subject: mail.subject, text: mail.body,
      ...(mail.calendar ? { icalEvent: { method: /^METHOD:CANCEL/m.test(mail.calendar) ? 'CANCEL' : 'PUBLISH', content: mail.calendar } } : {}),
    })
    return { outcome: 'sent', providerId: String(sent.messageId) }
  }
  catch (error) {
    const { responseCode, message, syscall, code } = error as { responseCode?: number, message?: string, syscall?: string, code?: string }
    const why = String(message ?? 'mail failed').slice(0, 200)
    if (responseCode !== undefined) return { outcome: 'refused', why, permanent: responseCode >= 500 }
    // No connection was made: nothing left. Broken off later, nobody can say whether the mail was taken.
    return syscall === 'connect' || code === 'EDNS' || /^(?:Connection timeout|Greeting never received)/.test(why) ? { outcome: 'refused', why, permanent: false } : { outcome: 'unknown', why }
  }
}

export function closeMail(): void {
  transport?.close()
  transport = undefined
}
