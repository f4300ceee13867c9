import { z } from 'zod'
import { urgencies } from '#shared/domain/pathway/vocabulary'

const words = z.string().trim().min(3, 'Say it in a few words.').max(1000)
const rowVersion = z.int().positive()

export const acknowledgeBody = z.strictObject({ plan: words, rowVersion })
export const takeOverBody = z.strictObject({ rowVersion })
export const recordBody = z.strictObject({ words, rowVersion })
export const closeEscalationBody = z.strictObject({ words, rowVersion })
export const raiseByHandBody = z.strictObject({ pathwayId: z.uuid(), urgency: z.enum(urgencies), words })
export const escalationsQuery = z.object({ show: z.enum(['open', 'closed']).default('open'), before: z.iso.datetime().optional(), beforeId: z.uuid().optional(), limit: z.coerce.number().int().min(1).max(100).default(60) })
