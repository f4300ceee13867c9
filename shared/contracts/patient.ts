import { z } from 'zod'
import { stages } from '#shared/domain/pathway/vocabulary'

export const findPatientsQuery = z.object({ find: z.string().trim().min(2, 'Type two letters or more.').max(80) })
export const pathwaysQuery = z.object({
  stage: z.enum(stages).optional(),
  /** The last row of the page before: its surgery instant (or `none`) and id. */
  after: z.string().regex(/^(none|\d{4}-\d{2}-\d{2}T[\d:.]+Z)_[0-9a-f-]{36}$/, 'Not a page mark.').optional(),
})
