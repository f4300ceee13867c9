import { Readable } from 'node:stream'
import { getRequestHeader } from 'h3'
import { presentImport } from '#server/presenters/referral-import'
import { checkImport, importLimits } from '#server/services/referral/check-import'
import { defineStaffApi } from '#server/utils/api'
import { bodyParts, readUpload, safeName } from '#server/utils/upload'
import { importQuery } from '#shared/contracts/referral-import'
import { DomainError } from '#shared/domain/errors'

/** A file of referrals, looked at and not yet taken over. `text/csv` flows through; a form's file is read first. */
export default defineStaffApi({ query: importQuery }, async ({ ctx, query, event }) => {
  const type = getRequestHeader(event, 'content-type') ?? ''
  if (Number(getRequestHeader(event, 'content-length') ?? 0) > importLimits.bytes + 20_000) throw new DomainError('request.too-large', 'The file is larger than 10 MB. Split it.')
  const upload = type.startsWith('multipart/') ? await readUpload(event, importLimits.bytes) : undefined
  const file = await checkImport(ctx, { siteId: query.siteId, fileName: upload?.name ?? safeName(getRequestHeader(event, 'x-file-name')), isCsv: upload !== undefined || type.startsWith('text/csv'), bytes: upload ? Readable.from([upload.bytes]) : bodyParts(event) })
  return file ? presentImport({ file, siteName: '', personName: ctx.actor.name, isStalled: false }) : null
})
