import type { listAttachments } from '#server/services/referral/add-attachment'

type Listed = Awaited<ReturnType<typeof listAttachments>>

export function presentAttachment({ file, personName }: Listed['files'][number]) {
  return { id: file.id, name: file.name, mediaType: file.mediaType, bytes: file.bytes, addedAt: file.addedAt.toISOString(), addedBy: personName ?? '' }
}
export type AttachmentView = ReturnType<typeof presentAttachment>

export function presentAttachments({ files, canAdd }: Listed) {
  return { files: files.map(presentAttachment), abilities: { canAdd } }
}
export type AttachmentsView = ReturnType<typeof presentAttachments>
