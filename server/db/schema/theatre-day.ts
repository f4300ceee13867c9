import { sql } from 'drizzle-orm'
import { boolean, check, date, doublePrecision, index, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import { id, instant, oneOf } from '#server/db/schema/columns'
import { people } from '#server/db/schema/people'
import { theatreCases, theatreLists } from '#server/db/schema/theatre'
import { safetySteps as stepNames } from '#shared/domain/theatre/safety-check'
import type { SafetyAnswers, StopReason } from '#shared/domain/theatre/safety-check'

export const listChangeKinds = ['made', 'added', 'cancelled', 'replaced', 'ordered', 'constraints', 'locked', 'unlocked'] as const

/** What happened to a theatre list, in order. Append-only: what changed after the surgeon locked it stays visible. */
export const theatreListChanges = pgTable('theatre_list_changes', {
  id: id(),
  listId: uuid('list_id').notNull().references(() => theatreLists.id),
  at: instant('at').notNull(),
  personId: uuid('person_id').notNull().references(() => people.id),
  kind: text('kind', { enum: listChangeKinds }).notNull(),
  words: text('words').notNull(),
  reason: text('reason'),
  afterLock: boolean('after_lock').notNull(),
  /** Ids only: the order before and after. */
  detail: jsonb('detail').$type<Record<string, unknown>>().notNull().default({}),
}, table => [
  check('theatre_list_changes_kind', oneOf(table.kind, listChangeKinds)),
  index('theatre_list_changes_of').on(table.listId, table.at),
])

/** One signed step of one case's safety check. Append-only. */
export const safetySteps = pgTable('safety_steps', {
  id: id(),
  caseId: uuid('case_id').notNull().references(() => theatreCases.id),
  step: text('step', { enum: stepNames }).notNull(),
  answers: jsonb('answers').$type<SafetyAnswers>().notNull(),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
}, table => [
  check('safety_steps_step', oneOf(table.step, stepNames)),
  unique('safety_steps_once').on(table.caseId, table.step),
])

/** A lens held up to the check: read from its label, or typed from the box. Append-only. */
export const lensScans = pgTable('lens_scans', {
  id: id(),
  caseId: uuid('case_id').notNull().references(() => theatreCases.id),
  source: text('source', { enum: ['scanned', 'typed'] }).notNull(),
  label: text('label'),
  gtin: text('gtin'),
  lot: text('lot'),
  serial: text('serial'),
  expiresOn: date('expires_on', { mode: 'string' }),
  model: text('model'),
  powerD: doublePrecision('power_d'),
  /** The plan that it was held against. */
  plannedModel: text('planned_model'),
  plannedPowerD: doublePrecision('planned_power_d'),
  reasons: jsonb('reasons').$type<StopReason[]>().notNull(),
  scannedBy: uuid('scanned_by').notNull().references(() => people.id),
  scannedAt: instant('scanned_at').notNull(),
}, table => [
  check('lens_scans_source', oneOf(table.source, ['scanned', 'typed'])),
  index('lens_scans_of').on(table.caseId, table.scannedAt),
])

/** What stopped the check. Append-only: an explanation is a row of its own. */
export const safetyStops = pgTable('safety_stops', {
  id: id(),
  caseId: uuid('case_id').notNull().references(() => theatreCases.id),
  step: text('step', { enum: stepNames }).notNull(),
  scanId: uuid('scan_id').references(() => lensScans.id),
  reasons: jsonb('reasons').$type<StopReason[]>().notNull(),
  raisedBy: uuid('raised_by').notNull().references(() => people.id),
  raisedAt: instant('raised_at').notNull(),
}, table => [
  check('safety_stops_step', oneOf(table.step, stepNames)),
  check('safety_stops_reasons', sql`jsonb_array_length(${table.reasons}) > 0`),
  index('safety_stops_of').on(table.caseId, table.raisedAt),
])

/** A surgeon's words on one stop, signed. Append-only; one for each stop. */
export const safetyExplanations = pgTable('safety_explanations', {
  stopId: uuid('stop_id').primaryKey().references(() => safetyStops.id),
  words: text('words').notNull(),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
})

/** Which lens a trade item number (GS1 GTIN, fourteen digits) is printed on. */
export const lensLabels = pgTable('lens_labels', {
  gtin: text('gtin').primaryKey(),
  model: text('model').notNull(),
  powerD: doublePrecision('power_d').notNull(),
}, table => [
  check('lens_labels_gtin', sql`${table.gtin} ~ '^[0-9]{14}$'`),
  check('lens_labels_power', sql`${table.powerD} between -20 and 60`),
])
