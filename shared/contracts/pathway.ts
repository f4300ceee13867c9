import { z } from 'zod'
import { stageGroups } from '#shared/domain/pathway/next-step'
import { closeReasons, stages } from '#shared/domain/pathway/vocabulary'

const words = (max: number) => z.string().trim().min(3, 'Say it in a few words.').max(max)
const rowVersion = z.int().positive()

export const pathwaysQuery = z.object({
  stage: z.enum(stages).optional(),
  group: z.enum(stageGroups).optional(),
  show: z.enum(['late', 'escalated']).optional(),
  surgeonId: z.uuid().optional(),
  siteId: z.uuid().optional(),
  /** The last row of the page before: its surgery instant (or `none`) and id. */
  after: z.string().regex(/^(none|\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d{1,6})?Z)_[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/, 'Not a page mark.').optional(),
})
export type PathwaysQuery = z.output<typeof pathwaysQuery>

export const pathwayRowVersionBody = z.strictObject({ rowVersion })
export const holdBody = z.strictObject({ reason: words(300), lookAgainOn: z.iso.date('Give a date to look again.'), rowVersion })
export const closePathwayBody = z.strictObject({ reason: z.enum(closeReasons), words: z.string().trim().max(1000).default(''), rowVersion })
export const reopenBody = z.strictObject({ reason: words(500), rowVersion })
export const shareBody = z.strictObject({ practiceId: z.uuid().nullable(), rowVersion })
export const decisionBody = z.strictObject({ decision: words(500), rowVersion })
export const foundBody = z.strictObject({ found: words(1000), rowVersion })

/** What of the horizon's filter is kept under a name: never a page mark. */
const savedQuery = z.strictObject({ group: z.enum(stageGroups).optional(), show: z.enum(['late', 'escalated']).optional(), surgeonId: z.uuid().optional(), siteId: z.uuid().optional() })
export type SavedFilterQuery = z.output<typeof savedQuery>
export const savedFilterBody = z.strictObject({ name: z.string().trim().min(1, 'Give the filter a name.').max(40, 'At most 40 characters.'), query: savedQuery })
export type SavedFilterBody = z.output<typeof savedFilterBody>
