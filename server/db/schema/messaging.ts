import { sql } from 'drizzle-orm'
import { check, foreignKey, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import { id, instant, oneOf } from '#server/db/schema/columns'
import { escalations } from '#server/db/schema/escalation'
import { pathways, patients } from '#server/db/schema/patient'
import { people, sites } from '#server/db/schema/people'
import { visits } from '#server/db/schema/visit'
import { messageChannels, messageStates, storedKinds } from '#shared/domain/messaging/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'

/** The truth about what is due to be sent. A job only wakes the sender. */
export const messages = pgTable('messages', {
  id: id(),
  kind: text('kind', { enum: storedKinds }).notNull(),
  /** `patient:<id>` or `person:<id>`. */
  recipientKey: text('recipient_key').notNull(),
  /** What it is about: `visit:<id>`, `escalation:<id>`, `pathway:<id>`. */
  subjectKey: text('subject_key').notNull(),
  /** Which of several of this kind: `2026-10-15`, `rung-2`. */
  occasion: text('occasion').notNull(),
  channel: text('channel', { enum: messageChannels }).notNull(),
  patientId: uuid('patient_id').references(() => patients.id),
  pathwayId: uuid('pathway_id'),
  personId: uuid('person_id').references(() => people.id),
  visitId: uuid('visit_id').references(() => visits.id),
  escalationId: uuid('escalation_id').references(() => escalations.id),
  siteId: uuid('site_id').references(() => sites.id),
  toAddress: text('to_address').notNull(),
  subject: text('subject').notNull().default(''),
  body: text('body').notNull(),
  language: text('language').notNull().default('en'),
  /** Two messages to one person with the same topic say the same; none for words written by hand. */
  topic: text('topic').notNull().default(''),
  calendar: text('calendar'),
  state: text('state', { enum: messageStates }).notNull().default('queued'),
  dueAt: instant('due_at').notNull(),
  expiresAt: instant('expires_at').notNull(),
  attempts: integer('attempts').notNull().default(0),
  /** Set before the provider is called: while it is in the future another sender leaves the row alone. */
  leaseUntil: instant('lease_until'),
  /** True from the moment before a call until its answer is recorded: a crash in between leaves it set. */
  inDoubtSince: instant('in_doubt_since'),
  providerId: text('provider_id').unique(),
  lastError: text('last_error'),
  sentAt: instant('sent_at'),
  deliveredAt: instant('delivered_at'),
  createdAt: instant('created_at').notNull(),
}, table => [
  foreignKey({ name: 'messages_same_patient', columns: [table.pathwayId, table.patientId], foreignColumns: [pathways.id, pathways.patientId] }).onUpdate('cascade'),
  check('messages_kind', oneOf(table.kind, storedKinds)),
  check('messages_state', oneOf(table.state, messageStates)),
  check('messages_channel', oneOf(table.channel, messageChannels)),
  check('messages_one_recipient', sql`num_nonnulls(${table.patientId}, ${table.personId}) = 1`),
  unique('messages_once').on(table.recipientKey, table.kind, table.subjectKey, table.occasion, table.channel),
  index('messages_due').on(table.dueAt).where(sql`state in ('queued', 'sending')`),
  index('messages_patient').on(table.patientId, table.createdAt),
  index('messages_same_words').on(table.recipientKey, table.topic).where(sql`topic <> ''`),
  index('messages_checks_sent').on(table.kind, table.dueAt).where(sql`kind = 'safety.day3'`),
  index('messages_alerts').on(table.personId, table.dueAt).where(sql`person_id is not null`),
  index('messages_visit').on(table.visitId),
  index('messages_site_day').on(table.siteId, table.dueAt, table.id),
])

/** Append-only. */
export const messageEvents = pgTable('message_events', {
  id: id(),
  messageId: uuid('message_id').notNull().references(() => messages.id),
  at: instant('at').notNull(),
  kind: text('kind').notNull(),
  detail: jsonb('detail').$type<Record<string, unknown>>().notNull().default({}),
}, table => [index('message_events_of').on(table.messageId, table.at)])

export const inboundTexts = pgTable('inbound_texts', {
  id: id(),
  providerId: text('provider_id').notNull().unique(),
  fromNumber: text('from_number').notNull(),
  patientId: uuid('patient_id').references(() => patients.id),
  visitId: uuid('visit_id').references(() => visits.id),
  /** A member of staff who answered an alert. */
  personId: uuid('person_id').references(() => people.id),
  /** Null when nobody knows whose number it is: every unit's list shows it. */
  siteId: uuid('site_id').references(() => sites.id),
  body: text('body').notNull(),
  meaning: text('meaning').notNull(),
  receivedAt: instant('received_at').notNull(),
  handledBy: uuid('handled_by').references(() => people.id),
  handledAt: instant('handled_at'),
  handledWords: text('handled_words'),
}, table => [index('inbound_texts_open').on(table.siteId, table.handledAt, table.receivedAt)])

/** The patient's link. Only its hash is kept. */
export const patientLinks = pgTable('patient_links', {
  id: id(),
  tokenHash: text('token_hash').notNull().unique(),
  patientId: uuid('patient_id').notNull().references(() => patients.id),
  visitId: uuid('visit_id').references(() => visits.id),
  pathwayId: uuid('pathway_id').references(() => pathways.id),
  createdAt: instant('created_at').notNull(),
  expiresAt: instant('expires_at').notNull(),
  failedTries: integer('failed_tries').notNull().default(0),
  lockedUntil: instant('locked_until'),
  closedAt: instant('closed_at'),
})

export const symptomChecks = pgTable('symptom_checks', {
  id: id(),
  patientId: uuid('patient_id').notNull(),
  pathwayId: uuid('pathway_id').notNull(),
  answers: jsonb('answers').$type<Record<string, boolean>>().notNull(),
  urgency: text('urgency', { enum: urgencies }),
  onNurseList: text('on_nurse_list'),
  /** What they added in their own words. */
  words: text('words').notNull().default(''),
  at: instant('at').notNull(),
}, table => [
  foreignKey({ name: 'symptom_checks_same_patient', columns: [table.pathwayId, table.patientId], foreignColumns: [pathways.id, pathways.patientId] }).onUpdate('cascade'),
])
