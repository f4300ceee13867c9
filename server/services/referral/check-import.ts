import { pipeline, Readable } from 'node:stream'
import { CsvError, parse } from 'csv-parse'
import { eq } from 'drizzle-orm'
import { referralImportRows, referralImports, sites } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { unscopedFindKnown } from '#server/services/referral/find-known'
import { readLine } from '#server/services/referral/read-line'
import type { LineRules, ReadLine } from '#server/services/referral/read-line'
import { columnNames, neededColumns } from '#shared/contracts/referral-import'
import { DomainError } from '#shared/domain/errors'
import { decideFate } from '#shared/domain/referral/decide-fate'
import { rowFates } from '#shared/domain/referral/import-row'
import { referralSettingsOf } from '#shared/domain/referral/site-settings'
import { dayBounds } from '#shared/domain/visit/site-day'

export const importLimits = { bytes: 10_000_000, rows: 20_000, lineCharacters: 20_000 }
const batchSize = 500

export interface ImportFile { siteId: string, fileName: string, isCsv: boolean, bytes: AsyncIterable<Uint8Array> }
interface Numbered { line: number, read: ReadLine }
interface Progress { importId: string, rules: LineRules, rows: number, fates: Record<string, number>, seen: Map<string, number> }

/**
 * Looks at a file of referrals line by line and keeps the fate of each; no patient is made. The file flows through in batches: one
 * look for known people and one insert for each, so that its length costs time and no memory.
 */
export async function checkImport(ctx: ServiceContext, file: ImportFile) {
  if (!may(ctx.actor, 'importReferrals', file.siteId)) throw new DomainError('referral.not-allowed', 'A coordinator or the clinical lead of this site takes in files of referrals.')
  if (!file.isCsv) throw new DomainError('request.wrong-type', 'Send the file as text/csv, or in a form.')
  const [site] = await ctx.db.select().from(sites).where(eq(sites.id, file.siteId))
  if (!site) throw new DomainError('referral.site-not-found', 'There is no such site.')
  const [made] = await ctx.db.insert(referralImports).values({ siteId: site.id, personId: ctx.actor.personId, fileName: file.fileName, startedAt: ctx.now, progressAt: ctx.now }).returning({ id: referralImports.id })
  if (!made) throw new DomainError('referral.conflict', 'The file could not be taken in.')
  const progress: Progress = { importId: made.id, rules: { identifierCheck: referralSettingsOf(site.settings).identifierCheck, today: dayBounds(site.zone, ctx.now).date }, rows: 0, fates: Object.fromEntries(rowFates.map(fate => [fate, 0])), seen: new Map() }
  try {
    await readAll(ctx, file, progress)
  }
  catch (error) {
    const problem = fileProblem(error)
    // What was staged of a file that cannot be read is nobody's business any more.
    await ctx.db.delete(referralImportRows).where(eq(referralImportRows.importId, made.id))
    await ctx.db.update(referralImports).set({ state: 'failed', failedWhy: problem?.message ?? 'The file was broken off.' }).where(eq(referralImports.id, made.id))
    throw problem ?? error
  }
  const [done] = await ctx.db.update(referralImports).set({ state: 'checked', rowsDone: progress.rows, fates: progress.fates }).where(eq(referralImports.id, made.id)).returning()
  await appendAudit(ctx.db, { at: ctx.now, event: 'referral.import-checked', personId: ctx.actor.personId, subjectKind: 'referral-import', subjectId: made.id, siteId: site.id, payload: { rows: progress.rows } })
  return done
}

async function readAll(ctx: ServiceContext, file: ImportFile, progress: Progress): Promise<void> {
  const parser = parse({ bom: true, columns: readHeader, info: true, trim: true, skip_empty_lines: true, relax_column_count: true, max_record_size: importLimits.lineCharacters })
  // A fault of the source ends the parser with it, and so reaches the loop below; nothing is left to do here.
  pipeline(Readable.from(decoded(file.bytes)), parser, () => undefined)
  let batch: Numbered[] = []
  for await (const { record, info } of parser as AsyncIterable<{ record: Record<string, string | undefined>, info: { lines: number, error?: { code: string } } }>) {
    if (++progress.rows > importLimits.rows) throw new DomainError('referral.too-large', `A file may hold ${importLimits.rows} referrals. Split it.`)
    batch.push({ line: info.lines, read: info.error ? { data: null, problems: [{ field: '(line)', code: 'columns', message: 'This line has more or fewer cells than the first line has names.' }] } : readLine(record, progress.rules) })
    if (batch.length === batchSize) {
      await keepBatch(ctx, batch, progress)
      batch = []
    }
  }
  await keepBatch(ctx, batch, progress)
  if (!progress.rows) throw new DomainError('referral.invalid', 'The file holds no referral.')
}

async function keepBatch(ctx: ServiceContext, batch: readonly Numbered[], progress: Progress): Promise<void> {
  if (!batch.length) return
  const known = await unscopedFindKnown(ctx.db, ctx.actor, batch.flatMap(({ line, read: { data } }) => data ? [{ line, name: data.name, birthDate: data.birthDate, identifier: data.identifier }] : []))
  const rows = batch.map(({ line, read: { data, problems } }) => {
    const decided = data ? decideFate(data, known.get(line) ?? [], lineBefore(progress.seen, data, line)) : { fate: 'error' as const, patientId: null, problems }
    progress.fates[decided.fate] = (progress.fates[decided.fate] ?? 0) + 1
    return { importId: progress.importId, line, data, ...decided }
  })
  await ctx.db.insert(referralImportRows).values(rows)
  await ctx.db.update(referralImports).set({ rowsDone: progress.rows, fates: progress.fates }).where(eq(referralImports.id, progress.importId))
}

/** The earlier line of this file that names the same person, if any. */
function lineBefore(seen: Map<string, number>, data: { name: string, birthDate: string, identifier: string | null }, line: number): number | undefined {
  const keys = [`${data.birthDate} ${data.name.toLowerCase()}`, ...data.identifier ? [data.identifier] : []]
  const before = keys.map(key => seen.get(key)).find(each => each !== undefined)
  for (const key of keys) if (!seen.has(key)) seen.set(key, line)
  return before
}

function readHeader(header: string[]): string[] {
  const names = header.map(name => name.trim().toLowerCase().replace(/[\s-]+/g, '_'))
  const unknown = names.filter(name => !columnNames.some(each => each === name))
  const missing = neededColumns.filter(name => !names.includes(name))
  const twice = names.filter((name, index) => names.indexOf(name) !== index)
  const problems = [
    ...unknown.map(name => ({ field: name.slice(0, 60) || '(empty)', code: 'unknown-column', message: `The first line has a column "${name.slice(0, 60)}" that is not known here.` })),
    ...missing.map(name => ({ field: name, code: 'required', message: `The first line lacks the column "${name}".` })),
    ...twice.map(name => ({ field: name.slice(0, 60), code: 'twice', message: `The column "${name.slice(0, 60)}" is there twice.` })),
  ]
  if (problems.length) throw new DomainError('referral.invalid', 'The first line of the file has to name the columns of the sample file.', { fields: problems })
  return names
}

async function* decoded(bytes: AsyncIterable<Uint8Array>): AsyncGenerator<string> {
  const decoder = new TextDecoder('utf-8', { fatal: true })
  let size = 0
  for await (const part of bytes) {
    size += part.byteLength
    if (size > importLimits.bytes) throw new DomainError('referral.too-large', 'The file is larger than 10 MB. Split it.')
    yield decoder.decode(part, { stream: true })
  }
  yield decoder.decode()
}

/** What is wrong with the file as a whole, in words; undefined for a fault of our own. */
function fileProblem(error: unknown): DomainError | undefined {
  if (error instanceof DomainError) return error
  const { code, lines } = error as { code?: string, lines?: number }
  if (code === 'ERR_ENCODING_INVALID_ENCODED_DATA') return new DomainError('referral.invalid', 'The file is not written in UTF-8. Save it again as "CSV UTF-8".')
  if (code === 'CSV_MAX_RECORD_SIZE') return new DomainError('referral.invalid', `Line ${lines ?? '?'} is too long: a quotation mark may not be closed.`, { fields: [{ field: `lines.${lines ?? 0}`, code: 'too-long', message: 'Close the quotation mark, or shorten the line.' }] })
  // The class, not the code: some codes of the parser start with CSV_, some do not.
  if (error instanceof CsvError) return new DomainError('referral.invalid', `Line ${lines ?? '?'} cannot be read: a quotation mark stands where none may.`, { fields: [{ field: `lines.${lines ?? 0}`, code: 'unreadable', message: 'Put the cell in quotation marks and double each mark in it.' }] })
  return undefined
}
