import type { H3Event } from 'h3'
import { getRequestHeader, readRawBody } from 'h3'
import twilio from 'twilio'
import { DomainError } from '#shared/domain/errors'

const mostBytes = 20_000

/** The form of a webhook whose signature holds for our public address. Anything else is refused before it is read further. */
export async function readSignedForm(event: H3Event): Promise<Record<string, string>> {
  const raw = await readRawBody(event, 'utf8') ?? ''
  const token = process.env.DAWNWARD_TEXT_TOKEN
  const signature = getRequestHeader(event, 'x-twilio-signature') ?? ''
  if (!token || raw.length > mostBytes) throw new DomainError('messaging.not-allowed', 'The signature does not hold.')
  const form = Object.fromEntries(new URLSearchParams(raw))
  const url = `${process.env.DAWNWARD_ORIGIN ?? 'http://127.0.0.1:3000'}${event.path}`
  if (!twilio.validateRequest(token, signature, url, form)) throw new DomainError('messaging.not-allowed', 'The signature does not hold.')
  if (Object.values(form).some(value => value.includes('\0'))) throw new DomainError('request.invalid', 'The text holds a character that cannot be stored.')
  return form
}
