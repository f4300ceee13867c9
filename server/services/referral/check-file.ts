import { fileTypeFromBuffer } from 'file-type'
import { redraw } from '#server/gateways/images'
import { DomainError } from '#shared/domain/errors'

export const attachmentTypes = { 'application/pdf': ['pdf'], 'image/jpeg': ['jpg', 'jpeg'], 'image/png': ['png'] } as const
export type AttachmentType = keyof typeof attachmentTypes
export const maxAttachmentBytes = 20_000_000

const refuse = (message: string, code = 'wrong-type') => new DomainError(`referral.${code}`, message, { fields: [{ field: 'file', code, message }] })
const isAllowed = (type: string): type is AttachmentType => type in attachmentTypes

/** What may be kept of a file: known by its content and its name alike, pictures drawn anew, a PDF that is nothing besides. */
export async function checkFile({ bytes, name }: { bytes: Uint8Array, name: string }): Promise<{ bytes: Uint8Array, mediaType: AttachmentType }> {
  const found = await fileTypeFromBuffer(bytes)
  if (!found || !isAllowed(found.mime)) throw refuse('A PDF, a JPEG or a PNG can be added. This file is neither, whatever its name.')
  const ending = name.split('.').at(-1)?.toLowerCase() ?? ''
  if (!attachmentTypes[found.mime].some(each => each === ending)) throw refuse(`The name ends in "${ending.slice(0, 12)}", but the file is a ${found.ext.toUpperCase()}. Give it its own name.`)
  if (found.mime === 'application/pdf') {
    checkPdf(bytes)
    return { bytes, mediaType: found.mime }
  }
  try {
    return { bytes: await redraw(bytes, found.mime), mediaType: found.mime }
  }
  catch {
    throw refuse('This picture is damaged, or larger than 40 million points.', 'invalid')
  }
}

const activeParts = /\/(JavaScript|JS|Launch|EmbeddedFiles?|RichMedia|XFA)[\s/<([]/

/** A PDF from its first byte to its last mark, that runs nothing and carries no other file. What is compressed in it is not looked into: it is never shown by us. */
function checkPdf(bytes: Uint8Array): void {
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString('latin1')
  const end = text.lastIndexOf('%%EOF')
  if (!text.startsWith('%PDF-') || end < 0 || text.slice(end + 5).trim() !== '') throw refuse('This PDF is damaged, or has something else before or behind it.', 'invalid')
  if (/<(script|html|svg|!doctype)/i.test(text.slice(0, 2048)) || text.includes('PK\u0005\u0006', Math.max(0, text.length - 70_000))) throw refuse('This PDF is something else as well.', 'invalid')
  if (activeParts.test(text)) throw refuse('This PDF runs a script or carries another file. Print it to a plain PDF.', 'invalid')
}
