import { and, asc, desc, eq, gt, inArray, sql } from 'drizzle-orm'
import type { SQL } from 'drizzle-orm'
import { patients, people, referralImportRows, referralImports, sites } from '#server/db/schema/index'
import { pathwayActs } from '#server/policies/pathway'
import { sitesWithRole } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'
import type { ImportRowsQuery } from '#shared/contracts/referral-import'
import { DomainError } from '#shared/domain/errors'
import type { Actor } from '#shared/domain/people/vocabulary'
import type { RowFate } from '#shared/domain/referral/import-row'

export const pageOfRows = 100
/** A file whose checking has not got further for this long was broken off. */
const stalledMs = 60_000

export function importInScope(actor: Actor): SQL {
  const mine = sitesWithRole(actor, ...pathwayActs.importReferrals)
  return mine.length ? inArray(referralImports.siteId, mine) : sql`false`
}

/** The last files of the caller's sites with how far each is. */
export async function listImports(ctx: ServiceContext) {
  const mine = sitesWithRole(ctx.actor, ...pathwayActs.importReferrals)
  if (!mine.length) throw new DomainError('referral.not-allowed', 'A coordinator or the clinical lead takes in files of referrals.')
  const [files, where] = await Promise.all([
    ctx.db.select({ file: referralImports, siteName: sites.name, personName: people.name }).from(referralImports).innerJoin(sites, eq(sites.id, referralImports.siteId)).innerJoin(people, eq(people.id, referralImports.personId))
      .where(importInScope(ctx.actor)).orderBy(desc(referralImports.startedAt)).limit(10),
    ctx.db.select({ id: sites.id, name: sites.name }).from(sites).where(inArray(sites.id, mine)).orderBy(asc(sites.name)),
  ])
  return { files: files.map(row => ({ ...row, isStalled: row.file.state === 'checking' && ctx.now.getTime() - row.file.startedAt.getTime() > stalledMs })), sites: where }
}
export type ImportList = Awaited<ReturnType<typeof listImports>>

/** The lines of one file, a keyset page at a time by line. */
export async function listImportRows(ctx: ServiceContext, importId: string, { fate, after }: ImportRowsQuery) {
  const [[found], rows] = await Promise.all([
    ctx.db.select({ file: referralImports, siteName: sites.name, personName: people.name }).from(referralImports).innerJoin(sites, eq(sites.id, referralImports.siteId)).innerJoin(people, eq(people.id, referralImports.personId))
      .where(and(eq(referralImports.id, importId), importInScope(ctx.actor))),
    pageRows(ctx, importId, after, fate ? [fate] : undefined),
  ])
  if (!found) throw new DomainError('referral.not-found', 'There is no such file.')
  return { ...found, isStalled: false, rows }
}

function pageRows(ctx: ServiceContext, importId: string, after: number, fates?: RowFate[], limit = pageOfRows) {
  return ctx.db.select({ row: referralImportRows, recordNumber: patients.recordNumber }).from(referralImportRows).leftJoin(patients, eq(patients.id, referralImportRows.patientId))
    .innerJoin(referralImports, and(eq(referralImports.id, referralImportRows.importId), importInScope(ctx.actor)))
    .where(and(eq(referralImportRows.importId, importId), gt(referralImportRows.line, after), fates ? inArray(referralImportRows.fate, fates) : undefined)).orderBy(asc(referralImportRows.line)).limit(limit)
}

/** Every line that was left behind, for the sender to correct: in pages, so that a long file is never held whole. */
export async function* exportLeftBehind(ctx: ServiceContext, importId: string) {
  for (let after = 0; ;) {
    const rows = await pageRows(ctx, importId, after, ['error', 'duplicate'], 500)
    yield rows
    const last = rows.at(-1)
    if (!last || rows.length < 500) return
    after = last.row.line
  }
}
