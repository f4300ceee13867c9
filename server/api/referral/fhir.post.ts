import { getRequestHeader } from 'h3'
import { takeBundle } from '#server/services/referral/take-bundle'
import { defineStaffApi } from '#server/utils/api'
import { readUpload } from '#server/utils/upload'
import { importQuery } from '#shared/contracts/referral-import'
import { DomainError } from '#shared/domain/errors'

const maxBundleBytes = 2_000_000

/** Referrals of another system as an HL7 FHIR R4 Bundle: as the body (`application/fhir+json`), or as the file of a form. */
export default defineStaffApi({ query: importQuery }, async ({ ctx, query, event }) => {
  const type = getRequestHeader(event, 'content-type') ?? ''
  if (!/^(application\/(fhir\+)?json|multipart\/form-data)/.test(type)) throw new DomainError('request.wrong-type', 'Send the bundle as application/fhir+json.')
  const { bytes } = await readUpload(event, maxBundleBytes)
  return takeBundle(ctx, { siteId: query.siteId, body: parse(bytes) })
})

function parse(bytes: Uint8Array): unknown {
  try {
    const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes)
    if (text.includes('\0') || text.includes('\\u0000')) throw new DomainError('request.invalid', 'The text holds a character that cannot be stored.')
    return JSON.parse(text)
  }
  catch (error) {
    if (error instanceof DomainError) throw error
    throw new DomainError('request.invalid', 'The bundle is not valid JSON in UTF-8.', { detail: { issue: [{ severity: 'error', code: 'structure', diagnostics: 'Not valid JSON in UTF-8.', expression: ['Bundle'] }] } })
  }
}
