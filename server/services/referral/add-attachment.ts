import { createHash } from 'node:crypto'
import { and, asc, eq, sql } from 'drizzle-orm'
import { attachments, pathways, people } from '#server/db/schema/index'
import { useFiles } from '#server/gateways/files'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { loadPathway, lockPathway } from '#server/services/pathway/load-pathway'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { recordEvent } from '#server/services/pathway/record-event'
import { checkFile } from '#server/services/referral/check-file'
import { DomainError } from '#shared/domain/errors'

const maxOfPathway = 40
const refusal = 'The team of this site adds files to a referral.'

/** Adds a file to the referral of a pathway. The bytes are kept before the row is written and taken away again when it is not. */
export async function addAttachment(ctx: ServiceContext, { pathwayId, bytes, name }: { pathwayId: string, bytes: Uint8Array, name: string }) {
  const seen = await loadPathway(ctx.db, ctx.actor, pathwayId)
  if (!may(ctx.actor, 'addAttachment', seen.pathway.siteId)) throw new DomainError('pathway.not-allowed', refusal)
  const file = await checkFile({ bytes, name })
  const sha256 = createHash('sha256').update(file.bytes).digest('hex')
  const files = useFiles()
  const storedAs = await files.put(file.bytes)
  try {
    const added = await ctx.db.transaction(async (tx) => {
      const loaded = await lockPathway(tx, ctx, { pathwayId, act: 'addAttachment', refusal })
      const [before] = await tx.select({ n: sql<number>`count(*)::int`, same: sql<number>`(count(*) filter (where ${attachments.sha256} = ${sha256}))::int` }).from(attachments).where(eq(attachments.pathwayId, pathwayId))
      if (before?.same) throw new DomainError('referral.duplicate', 'This file is there already.')
      if ((before?.n ?? 0) >= maxOfPathway) throw new DomainError('referral.conflict', `A referral holds up to ${maxOfPathway} files.`)
      const [row] = await tx.insert(attachments).values({ patientId: loaded.patient.id, pathwayId, name, mediaType: file.mediaType, bytes: file.bytes.byteLength, sha256, storedAs, addedBy: ctx.actor.personId, addedAt: ctx.now }).returning()
      if (!row) throw new DomainError('referral.conflict', 'The file could not be added.')
      await recordEvent(tx, ctx, loaded, { kind: 'attachment-added', words: 'File added to the referral', audit: 'referral.attachment-added', payload: { attachmentId: row.id, mediaType: row.mediaType, bytes: row.bytes } })
      return { row, siteId: loaded.pathway.siteId }
    })
    await notifyLive(ctx.db, 'pathway', added.siteId, [pathwayId])
    return { file: added.row, personName: ctx.actor.name }
  }
  catch (error) {
    await files.remove(storedAs)
    throw error
  }
}

export async function listAttachments(ctx: ServiceContext, pathwayId: string) {
  const [{ pathway }, files] = await Promise.all([
    loadPathway(ctx.db, ctx.actor, pathwayId),
    ctx.db.select({ file: attachments, personName: people.name }).from(attachments).leftJoin(people, eq(people.id, attachments.addedBy)).innerJoin(pathways, eq(pathways.id, attachments.pathwayId))
      .where(and(eq(attachments.pathwayId, pathwayId), pathwaysInScope(ctx.actor))).orderBy(asc(attachments.addedAt), asc(attachments.id)),
  ])
  return { files, canAdd: may(ctx.actor, 'addAttachment', pathway.siteId) }
}

/** The bytes of one file for somebody who may see its pathway; else it does not exist. Who opened it is written down. */
export async function openAttachment(ctx: ServiceContext, id: string) {
  const [found] = await ctx.db.select({ file: attachments, siteId: pathways.siteId }).from(attachments).innerJoin(pathways, eq(pathways.id, attachments.pathwayId)).where(and(eq(attachments.id, id), pathwaysInScope(ctx.actor)))
  if (!found) throw new DomainError('referral.not-found', 'There is no such file.')
  const bytes = await useFiles().get(found.file.storedAs).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') throw new DomainError('referral.conflict', 'This file is not where it should be. Tell whoever runs the service.')
    throw error
  })
  if (createHash('sha256').update(bytes).digest('hex') !== found.file.sha256) throw new DomainError('referral.conflict', 'The file was changed where it is kept, and is not shown.')
  await appendAudit(ctx.db, { at: ctx.now, event: 'referral.attachment-opened', personId: ctx.actor.personId, subjectKind: 'attachment', subjectId: id, siteId: found.siteId })
  return { file: found.file, bytes }
}
