import { z } from 'zod'
import { visitKinds } from '#shared/domain/review/vocabulary'
import { sessionKinds } from '#shared/domain/visit/vocabulary'

const words = (max: number) => z.string().trim().min(1, 'Say why, in a few words.').max(max)
const isoDate = z.iso.date('Use a date such as 2026-10-15.')

export const clinicDayQuery = z.object({ siteId: z.uuid().optional(), date: isoDate.optional() })
export const toBookQuery = z.object({ siteId: z.uuid().optional() })
export const openPlacesQuery = z.object({ siteId: z.uuid().optional(), kind: z.enum(sessionKinds), from: isoDate.optional(), days: z.coerce.number().int().min(1).max(60).default(7) })

export const bookVisitBody = z.strictObject({
  pathwayId: z.uuid(),
  kind: z.enum(visitKinds),
  /** A named place, or any free place of a session. */
  placeId: z.uuid().optional(),
  sessionId: z.uuid().optional(),
  note: z.string().trim().max(300).default(''),
}).refine(body => Boolean(body.placeId) !== Boolean(body.sessionId), { message: 'Name one place, or one session.', path: ['placeId'] })
export type BookVisitBody = z.infer<typeof bookVisitBody>

export const moveVisitBody = z.strictObject({ placeId: z.uuid(), rowVersion: z.int().positive() })
export const cancelVisitBody = z.strictObject({ reason: words(300), rowVersion: z.int().positive() })
export const rowVersionBody = z.strictObject({ rowVersion: z.int().positive() })
export const missingStepBody = z.strictObject({ step: z.enum(['call', 'text', 'second-call', 'found', 'not-found']), outcome: words(300) })
export type MissingStepBody = z.infer<typeof missingStepBody>
export const bookListBody = z.strictObject({
  bookings: z.array(z.strictObject({ pathwayId: z.uuid(), placeId: z.uuid() })).min(1).max(40),
})
export type BookListBody = z.infer<typeof bookListBody>
