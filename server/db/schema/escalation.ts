import { sql } from 'drizzle-orm'
import { check, foreignKey, index, integer, jsonb, pgTable, serial, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { id, instant, oneOf, rowVersion } from '#server/db/schema/columns'
import { pathways } from '#server/db/schema/patient'
import { people, sites } from '#server/db/schema/people'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import { escalationStates } from '#shared/domain/escalation/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'

export const escalations = pgTable('escalations', {
  id: id(),
  /** What a text may say instead of a name. */
  number: serial('number').notNull().unique(),
  pathwayId: uuid('pathway_id').notNull(),
  patientId: uuid('patient_id').notNull(),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  urgency: text('urgency', { enum: urgencies }).notNull(),
  state: text('state', { enum: escalationStates }).notNull().default('open'),
  reasons: jsonb('reasons').$type<EscalationReason[]>().notNull(),
  raisedAt: instant('raised_at').notNull(),
  raisedBy: uuid('raised_by').references(() => people.id),
  answerBy: instant('answer_by').notNull(),
  /** Who was told first. */
  surgeonId: uuid('surgeon_id').references(() => people.id),
  rung: integer('rung').notNull().default(1),
  /** When the next rung is due while nobody has acknowledged; null when the ladder has ended or stopped. */
  nextRungAt: instant('next_rung_at'),
  alertedAt: instant('alerted_at'),
  acknowledgedBy: uuid('acknowledged_by').references(() => people.id),
  acknowledgedAt: instant('acknowledged_at'),
  plan: text('plan'),
  closedBy: uuid('closed_by').references(() => people.id),
  closedAt: instant('closed_at'),
  closingWords: text('closing_words'),
  rowVersion: rowVersion(),
}, table => [
  foreignKey({ name: 'escalations_same_patient', columns: [table.pathwayId, table.patientId], foreignColumns: [pathways.id, pathways.patientId] }).onUpdate('cascade'),
  check('escalations_urgency', oneOf(table.urgency, urgencies)),
  check('escalations_state', oneOf(table.state, escalationStates)),
  check('escalations_acknowledged', sql`${table.state} <> 'acknowledged' or (${table.acknowledgedBy} is not null and ${table.acknowledgedAt} is not null)`),
  check('escalations_closed', sql`${table.state} <> 'closed' or (${table.closedAt} is not null and length(trim(${table.closingWords})) > 0)`),
  uniqueIndex('escalations_one_open').on(table.pathwayId).where(sql`state <> 'closed'`),
  index('escalations_open_list').on(table.siteId, table.state, table.answerBy),
  index('escalations_rungs_due').on(table.nextRungAt).where(sql`state = 'open'`),
])

/** Append-only. */
export const escalationActions = pgTable('escalation_actions', {
  id: id(),
  escalationId: uuid('escalation_id').notNull().references(() => escalations.id),
  at: instant('at').notNull(),
  kind: text('kind', { enum: ['raised', 'joined', 'alerted', 'rung', 'acknowledged', 'taken-over', 'recorded', 'closed'] }).notNull(),
  personId: uuid('person_id').references(() => people.id),
  words: text('words').notNull(),
}, table => [index('escalation_actions_of').on(table.escalationId, table.at)])

/** On-call shifts; `during` and its exclusion constraint are added by a hand-written migration. */
export const shifts = pgTable('shifts', {
  id: id(),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  rung: integer('rung').notNull(),
  personId: uuid('person_id').notNull().references(() => people.id),
  startsAt: instant('starts_at').notNull(),
  endsAt: instant('ends_at').notNull(),
}, table => [
  check('shifts_span', sql`${table.endsAt} > ${table.startsAt}`),
  check('shifts_rung', sql`${table.rung} between 1 and 3`),
])
