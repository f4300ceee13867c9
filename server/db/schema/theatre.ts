import { sql } from 'drizzle-orm'
import { boolean, check, doublePrecision, index, integer, jsonb, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { id, instant, rowVersion } from '#server/db/schema/columns'
import { pathways } from '#server/db/schema/patient'
import { people, sites } from '#server/db/schema/people'
import type { CaseConstraints } from '#shared/domain/theatre/list-constraints'

export const riskAssessments = pgTable('risk_assessments', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  version: integer('version').notNull(),
  factors: jsonb('factors').$type<Record<string, unknown>>().notNull(),
  result: jsonb('result').$type<Record<string, unknown>>().notNull(),
  assessedBy: uuid('assessed_by').notNull().references(() => people.id),
  assessedAt: instant('assessed_at').notNull(),
}, table => [unique('risk_assessments_version').on(table.pathwayId, table.version)])

export const consents = pgTable('consents', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  version: integer('version').notNull(),
  discussed: text('discussed').notNull(),
  riskFigurePercent: doublePrecision('risk_figure_percent'),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
  amendReason: text('amend_reason'),
}, table => [
  unique('consents_version').on(table.pathwayId, table.version),
  check('consents_amendment', sql`${table.version} = 1 or ${table.amendReason} is not null`),
])

export const theatreLists = pgTable('theatre_lists', {
  id: id(),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  surgeonId: uuid('surgeon_id').notNull().references(() => people.id),
  room: text('room').notNull(),
  startsAt: instant('starts_at').notNull(),
  endsAt: instant('ends_at').notNull(),
  lockedAt: instant('locked_at'),
  lockedBy: uuid('locked_by').references(() => people.id),
  /** When an anaesthetist is in this room; both null when there is none that day. */
  anaesthetistFrom: instant('anaesthetist_from'),
  anaesthetistTo: instant('anaesthetist_to'),
  rowVersion: rowVersion(),
}, table => [
  check('theatre_lists_locked', sql`(${table.lockedAt} is null) = (${table.lockedBy} is null)`),
  check('theatre_lists_anaesthetist', sql`(${table.anaesthetistFrom} is null) = (${table.anaesthetistTo} is null) and (${table.anaesthetistFrom} is null or ${table.anaesthetistTo} > ${table.anaesthetistFrom})`),
  check('theatre_lists_span', sql`${table.endsAt} > ${table.startsAt}`),
  index('theatre_lists_day').on(table.siteId, table.startsAt),
])

export const theatreCases = pgTable('theatre_cases', {
  id: id(),
  listId: uuid('list_id').notNull().references(() => theatreLists.id),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  position: integer('position').notNull(),
  plannedMinutes: integer('planned_minutes').notNull(),
  /** Minutes that a person set; a prediction is not put in their place. */
  minutesByHand: boolean('minutes_by_hand').notNull().default(false),
  constraints: jsonb('constraints').$type<CaseConstraints>().notNull().default({}),
  /** From the first signed step of the safety check to its last: what the surgeon's durations are learnt from. */
  startedAt: instant('started_at'),
  endedAt: instant('ended_at'),
  state: text('state', { enum: ['planned', 'in-theatre', 'done', 'cancelled'] }).notNull().default('planned'),
  cancelReason: text('cancel_reason'),
}, table => [
  check('theatre_cases_state', sql`${table.state} in ('planned', 'in-theatre', 'done', 'cancelled')`),
  check('theatre_cases_span', sql`${table.endedAt} is null or (${table.startedAt} is not null and ${table.endedAt} >= ${table.startedAt})`),
  check('theatre_cases_cancelled', sql`(${table.state} = 'cancelled') = (${table.cancelReason} is not null)`),
  uniqueIndex('theatre_cases_live').on(table.pathwayId).where(sql`state in ('planned', 'in-theatre')`),
  index('theatre_cases_list').on(table.listId, table.position),
])

export interface DropsLine { drug: string, perDay: number, days: number }

/** Signed. Amended by version, never changed. */
export const operationNotes = pgTable('operation_notes', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  caseId: uuid('case_id').references(() => theatreCases.id),
  version: integer('version').notNull(),
  operatedAt: instant('operated_at').notNull(),
  anaesthesia: text('anaesthesia').notNull(),
  incision: text('incision').notNull(),
  woundClockHour: integer('wound_clock_hour'),
  capsulorhexisMm: doublePrecision('capsulorhexis_mm'),
  technique: text('technique').notNull(),
  viscoelastics: text('viscoelastics').notNull().default(''),
  energyPercentSeconds: doublePrecision('energy_percent_seconds'),
  ultrasoundSeconds: doublePrecision('ultrasound_seconds'),
  nuclearDensity: text('nuclear_density'),
  complications: jsonb('complications').$type<string[]>().notNull().default([]),
  complicationWords: text('complication_words').notNull().default(''),
  lensModel: text('lens_model').notNull(),
  lensPowerD: doublePrecision('lens_power_d').notNull(),
  lensDeviationExplained: text('lens_deviation_explained'),
  lensAsPlanned: boolean('lens_as_planned').notNull(),
  drops: jsonb('drops').$type<DropsLine[]>().notNull(),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
  amendReason: text('amend_reason'),
}, table => [
  unique('operation_notes_version').on(table.pathwayId, table.version),
  check('operation_notes_amendment', sql`${table.version} = 1 or ${table.amendReason} is not null`),
  check('operation_notes_hour', sql`${table.woundClockHour} is null or ${table.woundClockHour} between 1 and 12`),
])
