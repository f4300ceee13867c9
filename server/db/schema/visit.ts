import { sql } from 'drizzle-orm'
import { check, doublePrecision, foreignKey, index, integer, jsonb, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { id, instant, oneOf, rowVersion } from '#server/db/schema/columns'
import { pathways } from '#server/db/schema/patient'
import { people, sites } from '#server/db/schema/people'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'
import { visitKinds } from '#shared/domain/review/vocabulary'
import { sessionKinds, visitStates } from '#shared/domain/visit/vocabulary'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'

export const clinicSessions = pgTable('clinic_sessions', {
  id: id(),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  kind: text('kind', { enum: sessionKinds }).notNull(),
  room: text('room').notNull(),
  startsAt: instant('starts_at').notNull(),
  endsAt: instant('ends_at').notNull(),
  closedAt: instant('closed_at'),
  rowVersion: rowVersion(),
}, table => [
  check('clinic_sessions_kind', oneOf(table.kind, sessionKinds)),
  check('clinic_sessions_span', sql`${table.endsAt} > ${table.startsAt}`),
  index('clinic_sessions_day').on(table.siteId, table.startsAt),
])

/** One place in a session. Capacity is the number of open rows here, so it can never be exceeded. */
export const sessionPlaces = pgTable('session_places', {
  id: id(),
  sessionId: uuid('session_id').notNull().references(() => clinicSessions.id),
  startsAt: instant('starts_at').notNull(),
  minutes: integer('minutes').notNull(),
  closedAt: instant('closed_at'),
}, table => [index('session_places_of').on(table.sessionId, table.startsAt)])

export const visits = pgTable('visits', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull(),
  patientId: uuid('patient_id').notNull(),
  placeId: uuid('place_id').references(() => sessionPlaces.id),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  kind: text('kind', { enum: visitKinds }).notNull(),
  state: text('state', { enum: visitStates }).notNull().default('booked'),
  startsAt: instant('starts_at').notNull(),
  bookedBy: uuid('booked_by').references(() => people.id),
  bookedAt: instant('booked_at').notNull(),
  confirmedAt: instant('confirmed_at'),
  cannotComeAt: instant('cannot_come_at'),
  arrivedAt: instant('arrived_at'),
  sentInAt: instant('sent_in_at'),
  optometristId: uuid('optometrist_id').references(() => people.id),
  doneAt: instant('done_at'),
  missingAt: instant('missing_at'),
  cancelReason: text('cancel_reason'),
  note: text('note').notNull().default(''),
  rowVersion: rowVersion(),
}, table => [
  foreignKey({ name: 'visits_same_patient', columns: [table.pathwayId, table.patientId], foreignColumns: [pathways.id, pathways.patientId] }).onUpdate('cascade'),
  check('visits_kind', oneOf(table.kind, visitKinds)),
  check('visits_state', oneOf(table.state, visitStates)),
  check('visits_cancelled', sql`(${table.state} = 'cancelled') = (${table.cancelReason} is not null)`),
  unique('visits_of_pathway').on(table.id, table.pathwayId),
  uniqueIndex('visits_one_per_place').on(table.placeId).where(sql`state not in ('cancelled', 'moved')`),
  uniqueIndex('visits_one_waiting_per_kind').on(table.pathwayId, table.kind).where(sql`state in ('booked', 'arrived', 'with-optometrist', 'missing') and kind <> 'unplanned'`),
  index('visits_day').on(table.siteId, table.startsAt),
  index('visits_pathway').on(table.pathwayId, table.startsAt),
])

/** The missing-patient steps as they were taken. Append-only. */
export const missingSteps = pgTable('missing_steps', {
  id: id(),
  visitId: uuid('visit_id').notNull().references(() => visits.id),
  step: text('step').notNull(),
  outcome: text('outcome').notNull(),
  at: instant('at').notNull(),
  personId: uuid('person_id').references(() => people.id),
}, table => [index('missing_steps_of').on(table.visitId, table.at)])

export const reviewDrafts = pgTable('review_drafts', {
  visitId: uuid('visit_id').primaryKey().references(() => visits.id),
  personId: uuid('person_id').notNull().references(() => people.id),
  findings: jsonb('findings').$type<ReviewFindings>().notNull(),
  savedAt: instant('saved_at').notNull(),
  rowVersion: rowVersion(),
})

/** Signed findings. Append-only: an amendment is a new version with author, time and reason. */
export const reviews = pgTable('reviews', {
  id: id(),
  visitId: uuid('visit_id').notNull(),
  pathwayId: uuid('pathway_id').notNull(),
  version: integer('version').notNull(),
  findings: jsonb('findings').$type<ReviewFindings>().notNull(),
  reasons: jsonb('reasons').$type<EscalationReason[]>().notNull(),
  unchecked: jsonb('unchecked').$type<string[]>().notNull().default([]),
  rulesVersion: text('rules_version').notNull(),
  bestLogMar: doublePrecision('best_log_mar'),
  iopMmHg: doublePrecision('iop_mmhg'),
  oedemaGrade: integer('oedema_grade'),
  cells: text('cells'),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
  amendReason: text('amend_reason'),
}, table => [
  foreignKey({ name: 'reviews_same_pathway', columns: [table.visitId, table.pathwayId], foreignColumns: [visits.id, visits.pathwayId] }),
  unique('reviews_version').on(table.visitId, table.version),
  check('reviews_amendment', sql`${table.version} = 1 or ${table.amendReason} is not null`),
  check('reviews_oedema', sql`${table.oedemaGrade} is null or ${table.oedemaGrade} between 0 and 4`),
  check('reviews_iop', sql`${table.iopMmHg} is null or ${table.iopMmHg} between 0 and 80`),
  index('reviews_pathway').on(table.pathwayId, table.signedAt),
])
