import { sql } from 'drizzle-orm'
import { check, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import { id, instant, oneOf } from '#server/db/schema/columns'
import { patients } from '#server/db/schema/patient'
import { people, sites } from '#server/db/schema/people'
import type { FieldProblem } from '#shared/domain/errors'
import { importStates, rowFates } from '#shared/domain/referral/import-row'
import type { ImportedReferral } from '#shared/domain/referral/import-row'

/** One file of referrals: first looked at line by line, then taken over whole or not at all. */
export const referralImports = pgTable('referral_imports', {
  id: id(),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  personId: uuid('person_id').notNull().references(() => people.id),
  fileName: text('file_name').notNull(),
  state: text('state', { enum: importStates }).notNull().default('checking'),
  rowsDone: integer('rows_done').notNull().default(0),
  fates: jsonb('fates').$type<Record<string, number>>().notNull().default({}),
  failedWhy: text('failed_why'),
  startedAt: instant('started_at').notNull(),
  /** When the checking last got further; one that stopped long ago was broken off. */
  progressAt: instant('progress_at').notNull(),
  committedAt: instant('committed_at'),
}, table => [
  check('referral_imports_state', oneOf(table.state, importStates)),
  index('referral_imports_of').on(table.siteId, table.startedAt),
])

/** What the file says, line by line, with its fate. Emptied of its data once the import is committed or given up. */
export const referralImportRows = pgTable('referral_import_rows', {
  id: id(),
  importId: uuid('import_id').notNull().references(() => referralImports.id, { onDelete: 'cascade' }),
  line: integer('line').notNull(),
  fate: text('fate', { enum: rowFates }).notNull(),
  data: jsonb('data').$type<ImportedReferral | null>(),
  /** Who it may be: the known patient of a new pathway, or the one to look at. */
  patientId: uuid('patient_id').references(() => patients.id),
  problems: jsonb('problems').$type<FieldProblem[]>().notNull().default([]),
}, table => [
  check('referral_import_rows_fate', oneOf(table.fate, rowFates)),
  unique('referral_import_rows_line').on(table.importId, table.line),
])

/** Two records of one person made one, signed, and taken back. The before-image is what taking back needs. */
export const patientMerges = pgTable('patient_merges', {
  id: id(),
  keptId: uuid('kept_id').notNull().references(() => patients.id),
  mergedId: uuid('merged_id').notNull().references(() => patients.id),
  reason: text('reason').notNull(),
  before: jsonb('before').$type<MergeBefore>().notNull(),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
  undoneBy: uuid('undone_by').references(() => people.id),
  undoneAt: instant('undone_at'),
  undoReason: text('undo_reason'),
}, table => [
  check('patient_merges_two', sql`${table.keptId} <> ${table.mergedId}`),
  check('patient_merges_undone', sql`(${table.undoneAt} is null) = (${table.undoneBy} is null) and (${table.undoneAt} is null) = (${table.undoReason} is null)`),
  index('patient_merges_kept').on(table.keptId),
  index('patient_merges_merged').on(table.mergedId),
])

export interface MergeBefore {
  kept: Record<string, unknown>
  merged: Record<string, unknown>
  /** Ids of what moved from the merged record to the kept one, by table. */
  moved: Record<string, string[]>
  /** What the kept record took over because it had nothing there. */
  filled: Record<string, unknown>
}
