import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { DomainError } from '#shared/domain/errors'

export interface Upload { bytes: Uint8Array, name: string, mediaType: string }

/** A file's name as it may be kept and shown: the last part, without anything that could lead elsewhere or break a header. */
export function safeName(given: string | undefined): string {
  const last = (given ?? '').split(/[\\/]/).at(-1) ?? ''
  // eslint-disable-next-line no-control-regex -- control characters are what is taken out
  const plain = last.normalize('NFC').replace(/[\u0000-\u001f\u007f-\u009f\u200b-\u200f\u202a-\u202e\u2066-\u2069"<>|:*?;]/g, '').replace(/^\.+/, '').trim().slice(0, 120)
  return plain || 'file'
}

/** The request's body as it arrives; whoever reads it stops at their own limit. */
export async function* bodyParts(event: H3Event): AsyncGenerator<Uint8Array> {
  for await (const part of event.node.req) yield part as Buffer
}

/** The whole body, up to a limit: what says in its head that it is larger is refused before it is read. */
export async function readBytes(event: H3Event, maxBytes: number): Promise<Buffer> {
  const tooLarge = () => new DomainError('request.too-large', `A file may have up to ${Math.round(maxBytes / 1_000_000)} MB.`)
  if (Number(getRequestHeader(event, 'content-length') ?? 0) > maxBytes + envelope) throw tooLarge()
  const parts: Uint8Array[] = []
  let size = 0
  for await (const part of bodyParts(event)) {
    size += part.byteLength
    if (size > maxBytes + envelope) throw tooLarge()
    parts.push(part)
  }
  return Buffer.concat(parts)
}
/** What a multipart form adds round its file. */
const envelope = 20_000

/** One file: the `file` part of a multipart form, or the body itself with its name in `x-file-name` (percent-encoded). */
export async function readUpload(event: H3Event, maxBytes: number): Promise<Upload> {
  const type = getRequestHeader(event, 'content-type') ?? ''
  const body = await readBytes(event, maxBytes)
  const upload = type.startsWith('multipart/form-data') ? await fileOf(body, type) : { bytes: body, name: safeName(decode(getRequestHeader(event, 'x-file-name'))), mediaType: type.split(';')[0]?.trim() ?? '' }
  if (upload.bytes.byteLength > maxBytes) throw new DomainError('request.too-large', `A file may have up to ${Math.round(maxBytes / 1_000_000)} MB.`)
  if (!upload.bytes.byteLength) throw new DomainError('request.invalid', 'The file is empty.', { fields: [{ field: 'file', code: 'required', message: 'Choose a file that is not empty.' }] })
  return upload
}

async function fileOf(body: Buffer, type: string): Promise<Upload> {
  const form = await new Response(new Uint8Array(body), { headers: { 'content-type': type } }).formData().catch(() => undefined)
  const files = form ? [...form.values()].filter(each => typeof each !== 'string') : []
  const [file] = files
  if (!file || files.length !== 1) throw new DomainError('request.invalid', 'Send one file.', { fields: [{ field: 'file', code: 'required', message: 'Choose one file.' }] })
  return { bytes: new Uint8Array(await file.arrayBuffer()), name: safeName(file.name), mediaType: file.type }
}

function decode(given: string | undefined): string | undefined {
  try {
    return given ? decodeURIComponent(given) : undefined
  }
  catch {
    return undefined
  }
}
