import { sql } from 'drizzle-orm'
import { check, doublePrecision, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import { id, instant } from '#server/db/schema/columns'
import { pathways } from '#server/db/schema/patient'
import { people } from '#server/db/schema/people'

/** One set of measurements of one eye. Repeats are new versions; the accepted one is named. */
export const biometries = pgTable('biometries', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  version: integer('version').notNull(),
  axialLengthMm: doublePrecision('axial_length_mm').notNull(),
  axialLengthSdMm: doublePrecision('axial_length_sd_mm'),
  k1D: doublePrecision('k1_d').notNull(),
  k1AxisDegrees: doublePrecision('k1_axis_degrees').notNull(),
  k2D: doublePrecision('k2_d').notNull(),
  k2AxisDegrees: doublePrecision('k2_axis_degrees').notNull(),
  anteriorChamberDepthMm: doublePrecision('anterior_chamber_depth_mm'),
  lensThicknessMm: doublePrecision('lens_thickness_mm'),
  whiteToWhiteMm: doublePrecision('white_to_white_mm'),
  cctUm: doublePrecision('cct_um'),
  endothelialCellsPerMm2: doublePrecision('endothelial_cells_per_mm2'),
  preoperativeLogMar: doublePrecision('preoperative_log_mar'),
  preoperativeAcuityEntered: text('preoperative_acuity_entered'),
  preoperativeIopMmHg: doublePrecision('preoperative_iop_mmhg'),
  source: text('source', { enum: ['typed', 'dicom'] }).notNull().default('typed'),
  warnings: jsonb('warnings').$type<{ ruleId: string, sentence: string }[]>().notNull().default([]),
  /** ruleId -> words and who said them; a warning without an entry here is still open. */
  explanations: jsonb('explanations').$type<Record<string, { words: string, personId: string, at: string }>>().notNull().default({}),
  measuredBy: uuid('measured_by').notNull().references(() => people.id),
  measuredAt: instant('measured_at').notNull(),
  acceptedBy: uuid('accepted_by').references(() => people.id),
  acceptedAt: instant('accepted_at'),
}, table => [
  unique('biometries_version').on(table.pathwayId, table.version),
  check('biometries_axial_length', sql`${table.axialLengthMm} between 14 and 40`),
  check('biometries_k', sql`${table.k1D} between 20 and 70 and ${table.k2D} between 20 and 70`),
  check('biometries_axes', sql`${table.k1AxisDegrees} between 0 and 180 and ${table.k2AxisDegrees} between 0 and 180`),
])

/** Signed. A change is a new version with its reason; the highest version is the current one. */
export const lensPlans = pgTable('lens_plans', {
  id: id(),
  pathwayId: uuid('pathway_id').notNull().references(() => pathways.id),
  version: integer('version').notNull(),
  biometryId: uuid('biometry_id').notNull().references(() => biometries.id),
  model: text('model').notNull(),
  powerD: doublePrecision('power_d').notNull(),
  targetD: doublePrecision('target_d').notNull(),
  predictedD: doublePrecision('predicted_d').notNull(),
  secondCheck: jsonb('second_check').$type<Record<string, unknown> | null>(),
  secondCheckAgrees: text('second_check_agrees', { enum: ['agrees', 'differs', 'not-available'] }).notNull(),
  differenceExplained: text('difference_explained'),
  signedBy: uuid('signed_by').notNull().references(() => people.id),
  signedAt: instant('signed_at').notNull(),
  amendReason: text('amend_reason'),
}, table => [
  unique('lens_plans_version').on(table.pathwayId, table.version),
  check('lens_plans_amendment', sql`${table.version} = 1 or ${table.amendReason} is not null`),
  check('lens_plans_power', sql`${table.powerD} between -20 and 60`),
  check('lens_plans_explained', sql`${table.secondCheckAgrees} = 'agrees' or ${table.differenceExplained} is not null`),
])
