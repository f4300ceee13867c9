import { bigserial, index, jsonb, pgTable, text, uuid } from 'drizzle-orm/pg-core'
import { instant } from '#server/db/schema/columns'

/** Who did what to which record. Append-only: the application's role cannot change or delete a row. */
export const auditRows = pgTable('audit_rows', {
  id: bigserial('id', { mode: 'number' }).primaryKey(),
  at: instant('at').notNull(),
  event: text('event').notNull(),
  personId: uuid('person_id'),
  subjectKind: text('subject_kind').notNull(),
  subjectId: text('subject_id').notNull(),
  siteId: uuid('site_id'),
  payload: jsonb('payload').$type<Record<string, unknown>>().notNull().default({}),
}, table => [
  index('audit_rows_at').on(table.at, table.id),
  index('audit_rows_subject').on(table.subjectKind, table.subjectId),
])
