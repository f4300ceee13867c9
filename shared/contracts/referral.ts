import { z } from 'zod'
import { redFlagsSchema } from '#shared/contracts/patient'

const rowVersion = z.int().positive()
const optionalText = (max: number) => z.string().trim().max(max).nullable().default(null).transform(value => value || null)

export const triageBody = z.strictObject({
  decision: z.enum(['accepted', 'returned', 'declined']),
  note: z.string().trim().max(1000).default(''),
  redFlags: redFlagsSchema,
  priority: z.enum(['routine', 'soon', 'urgent']).optional(),
  /** The other eye of the same person, waiting too: decided in the same act. */
  fellow: z.strictObject({ pathwayId: z.uuid(), rowVersion }).optional(),
  rowVersion,
})
export type TriageBody = z.output<typeof triageBody>

export const referralBody = z.strictObject({
  referrer: z.string().trim().min(2, 'Who refers?').max(160),
  referrerEmail: optionalText(200).refine(value => value === null || z.email().safeParse(value).success, 'Enter an e-mail address, or leave it empty.'),
  reason: z.string().trim().min(3, 'Why is the patient referred?').max(2000),
  visionRight: optionalText(40),
  visionLeft: optionalText(40),
  redFlags: redFlagsSchema,
  rowVersion,
})
export type ReferralBody = z.output<typeof referralBody>

/** The last row of the page before: when it was referred, and its id. */
export const triageQuery = z.object({
  after: z.string().regex(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d{1,6})?Z_[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/, 'Not a page mark.').optional(),
  siteId: z.uuid().optional(),
})
export type TriageQuery = z.output<typeof triageQuery>
