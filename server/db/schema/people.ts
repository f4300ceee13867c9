import { sql } from 'drizzle-orm'
import { boolean, check, index, integer, jsonb, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import type { SavedFilterQuery } from '#shared/contracts/pathway'
import { roleNames } from '#shared/domain/people/vocabulary'
import { id, instant, oneOf, rowVersion } from '#server/db/schema/columns'

export const sites = pgTable('sites', {
  id: id(),
  code: text('code').notNull().unique(),
  name: text('name').notNull(),
  zone: text('zone').notNull(),
  phone: text('phone').notNull(),
  emergencyPhone: text('emergency_phone').notNull(),
  address: text('address').notNull(),
  directions: text('directions').notNull(),
  isHospital: boolean('is_hospital').notNull(),
  /** Local settings a clinical lead may tighten: thresholds, policies, limits. */
  settings: jsonb('settings').$type<Record<string, unknown>>().notNull().default({}),
  rowVersion: rowVersion(),
})

export const practices = pgTable('practices', {
  id: id(),
  name: text('name').notNull(),
  phone: text('phone').notNull(),
  address: text('address').notNull(),
})

export const people = pgTable('people', {
  id: id(),
  name: text('name').notNull(),
  title: text('title').notNull(),
  email: text('email').notNull(),
  phone: text('phone'),
  passwordHash: text('password_hash'),
  disabledAt: instant('disabled_at'),
  failedTries: integer('failed_tries').notNull().default(0),
  lockedUntil: instant('locked_until'),
  singleKeysOff: boolean('single_keys_off').notNull().default(false),
  rowVersion: rowVersion(),
}, table => [
  uniqueIndex('people_email_once').on(sql`lower(${table.email})`),
])

export const roles = pgTable('roles', {
  id: id(),
  personId: uuid('person_id').notNull().references(() => people.id),
  role: text('role', { enum: roleNames }).notNull(),
  siteId: uuid('site_id').references(() => sites.id),
  /** Only a community optometrist belongs to a practice, and then to no site. */
  practiceId: uuid('practice_id').references(() => practices.id),
}, table => [
  check('roles_role', oneOf(table.role, roleNames)),
  check('roles_one_place', sql`num_nonnulls(${table.siteId}, ${table.practiceId}) = 1`),
  check('roles_practice_is_optometrist', sql`${table.practiceId} is null or ${table.role} = 'optometrist'`),
  uniqueIndex('roles_once').on(table.personId, table.role, sql`coalesce(${table.siteId}, ${table.practiceId})`),
])

export const sessions = pgTable('sessions', {
  /** SHA-256 of the opaque id in the sealed cookie: a leaked table opens no session. */
  idHash: text('id_hash').primaryKey(),
  personId: uuid('person_id').notNull().references(() => people.id),
  createdAt: instant('created_at').notNull(),
  lastSeenAt: instant('last_seen_at').notNull(),
  expiresAt: instant('expires_at').notNull(),
  revokedAt: instant('revoked_at'),
  userAgent: text('user_agent').notNull().default(''),
}, table => [index('sessions_person').on(table.personId)])

/** Filters of the horizon that a person gave a name. Only ids and words of the filter's own: nothing clinical. */
export const savedFilters = pgTable('saved_filters', {
  id: id(),
  personId: uuid('person_id').notNull().references(() => people.id),
  name: text('name').notNull(),
  query: jsonb('query').$type<SavedFilterQuery>().notNull(),
}, table => [uniqueIndex('saved_filters_once').on(table.personId, table.name)])

export const passwordResets = pgTable('password_resets', {
  id: id(),
  personId: uuid('person_id').notNull().references(() => people.id),
  tokenHash: text('token_hash').notNull().unique(),
  expiresAt: instant('expires_at').notNull(),
  usedAt: instant('used_at'),
})

/** The demo's shifted clock; read only when DAWNWARD_DEMO=1. One row. */
export const demoClock = pgTable('demo_clock', {
  id: integer('id').primaryKey().default(1),
  offsetSeconds: integer('offset_seconds').notNull().default(0),
}, table => [check('demo_clock_one', sql`${table.id} = 1`)])
