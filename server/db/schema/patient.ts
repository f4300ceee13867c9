import { sql } from 'drizzle-orm'
import type { AnyPgColumn } from 'drizzle-orm/pg-core'
import { boolean, check, date, index, integer, jsonb, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { id, instant, oneOf, rowVersion } from '#server/db/schema/columns'
import { people, practices, sites } from '#server/db/schema/people'
import { closeReasons, eyes, pathwayStates, stages } from '#shared/domain/pathway/vocabulary'

export interface PatientAlert { kind: 'allergy' | 'communication' | 'safety' | 'clinical', words: string }

export const patients = pgTable('patients', {
  id: id(),
  recordNumber: text('record_number').notNull().unique(),
  name: text('name').notNull(),
  birthDate: date('birth_date', { mode: 'string' }).notNull(),
  identifier: text('identifier').unique(),
  phone: text('phone'),
  email: text('email'),
  address: text('address').notNull().default(''),
  language: text('language').notNull().default('en'),
  preferredChannel: text('preferred_channel', { enum: ['text', 'email', 'call'] }).notNull().default('text'),
  /** Null until asked; false is a refusal and becomes a telephone task, never silence. */
  messageConsent: boolean('message_consent'),
  wantsDetail: boolean('wants_detail').notNull().default(false),
  wantsDropsReminders: boolean('wants_drops_reminders').notNull().default(false),
  needsTransport: boolean('needs_transport').notNull().default(false),
  interpreterLanguage: text('interpreter_language'),
  carer: jsonb('carer').$type<{ name: string, phone: string } | null>(),
  alerts: jsonb('alerts').$type<PatientAlert[]>().notNull().default([]),
  riskReasons: jsonb('risk_reasons').$type<string[]>().notNull().default([]),
  numberConfirmedAt: instant('number_confirmed_at'),
  textsStoppedAt: instant('texts_stopped_at'),
  diedOn: date('died_on', { mode: 'string' }),
  /** This record was found to be the same person as that one. It keeps its number, and nothing else is filed under it. */
  mergedIntoId: uuid('merged_into_id').references((): AnyPgColumn => patients.id),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  createdAt: instant('created_at').notNull(),
  rowVersion: rowVersion(),
}, table => [
  check('patients_channel', oneOf(table.preferredChannel, ['text', 'email', 'call'])),
  check('patients_name', sql`length(trim(${table.name})) > 0`),
  index('patients_name_search').on(sql`lower(${table.name}) text_pattern_ops`),
  index('patients_same').on(table.birthDate),
  index('patients_phone').on(table.phone),
  index('patients_name_birth').on(sql`lower(${table.name})`, table.birthDate),
])

export const pathways = pgTable('pathways', {
  id: id(),
  patientId: uuid('patient_id').notNull().references(() => patients.id),
  eye: text('eye', { enum: eyes }).notNull(),
  siteId: uuid('site_id').notNull().references(() => sites.id),
  surgeonId: uuid('surgeon_id').references(() => people.id),
  /** The community practice that this pathway is shared with, if any. */
  practiceId: uuid('practice_id').references(() => practices.id),
  stage: text('stage', { enum: stages }).notNull().default('referral'),
  state: text('state', { enum: pathwayStates }).notNull().default('open'),
  holdReason: text('hold_reason'),
  lookAgainOn: date('look_again_on', { mode: 'string' }),
  closeReason: text('close_reason', { enum: closeReasons }),
  priority: text('priority', { enum: ['routine', 'soon', 'urgent'] }).notNull().default('routine'),
  referredAt: instant('referred_at').notNull(),
  biometryAt: instant('biometry_at'),
  /** Planned, then actual, instant of surgery: the horizon of this eye. */
  surgeryAt: instant('surgery_at'),
  operatedAt: instant('operated_at'),
  dayOneAt: instant('day_one_at'),
  followUpAt: instant('follow_up_at'),
  dischargedAt: instant('discharged_at'),
  /** A recorded decision for another kind of first check than a booked day-one visit. */
  otherFirstCheck: text('other_first_check'),
  dayOneNeed: jsonb('day_one_need').$type<Record<string, unknown> | null>(),
  fellowEyeDecision: text('fellow_eye_decision'),
  stageSince: instant('stage_since').notNull(),
  rowVersion: rowVersion(),
}, table => [
  check('pathways_eye', oneOf(table.eye, eyes)),
  check('pathways_stage', oneOf(table.stage, stages)),
  check('pathways_state', oneOf(table.state, pathwayStates)),
  check('pathways_priority', oneOf(table.priority, ['routine', 'soon', 'urgent'])),
  check('pathways_closed_has_reason', sql`(${table.state} = 'closed') = (${table.closeReason} is not null)`),
  check('pathways_held_has_reason', sql`${table.state} <> 'held' or (${table.holdReason} is not null and ${table.lookAgainOn} is not null)`),
  unique('pathways_of_patient').on(table.id, table.patientId),
  uniqueIndex('pathways_one_open_per_eye').on(table.patientId, table.eye).where(sql`state <> 'closed' and stage <> 'discharge'`),
  index('pathways_list').on(table.siteId, table.stage, table.surgeryAt, table.id),
  index('pathways_waiting').on(table.referredAt, table.id).where(sql`stage = 'referral' and state <> 'closed'`),
  index('pathways_practice').on(table.practiceId),
  index('pathways_surgeon').on(table.surgeonId),
])

/** What happened to a pathway, in order. Append-only. */
export const pathwayEvents = pgTable('pathway_events', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  at: instant('at').notNull(),
  kind: text('kind').notNull(),
  fromStage: text('from_stage', { enum: stages }),
  toStage: text('to_stage', { enum: stages }),
  personId: uuid('person_id').references(() => people.id),
  words: text('words').notNull(),
  detail: jsonb('detail').$type<Record<string, unknown>>().notNull().default({}),
}, table => [index('pathway_events_of').on(table.pathwayId, table.at)])

export const referrals = pgTable('referrals', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().unique().references(() => pathways.id),
  referrer: text('referrer').notNull(),
  referrerEmail: text('referrer_email'),
  source: text('source', { enum: ['form', 'csv', 'fhir'] }).notNull().default('form'),
  reason: text('reason').notNull(),
  visionRight: text('vision_right'),
  visionLeft: text('vision_left'),
  redFlags: jsonb('red_flags').$type<Record<string, boolean>>().notNull().default({}),
  triageDecision: text('triage_decision', { enum: ['accepted', 'returned', 'declined'] }),
  triageNote: text('triage_note'),
  triagedBy: uuid('triaged_by').references(() => people.id),
  triagedAt: instant('triaged_at'),
  rowVersion: rowVersion(),
}, table => [
  check('referrals_decision', sql`${table.triageDecision} is null or ${oneOf(table.triageDecision, ['accepted', 'returned', 'declined'])}`),
])

export const attachments = pgTable('attachments', {
  id: id(),
  patientId: uuid('patient_id').notNull().references(() => patients.id),
  pathwayId: uuid('pathway_id').references(() => pathways.id),
  name: text('name').notNull(),
  mediaType: text('media_type').notNull(),
  bytes: integer('bytes').notNull(),
  sha256: text('sha256').notNull(),
  storedAs: text('stored_as').notNull(),
  addedBy: uuid('added_by').references(() => people.id),
  addedAt: instant('added_at').notNull(),
}, table => [index('attachments_of').on(table.pathwayId, table.addedAt)])
