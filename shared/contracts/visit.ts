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
  /** Why a day-one place is booked that does not meet what the eye needs. */
  despite: words(300).optional(),
}).refine(body => Boolean(body.placeId) !== Boolean(body.sessionId), { message: 'Name one place, or one session.', path: ['placeId'] })
export type BookVisitBody = z.infer<typeof bookVisitBody>

export const moveVisitBody = z.strictObject({ placeId: z.uuid(), rowVersion: z.int().positive() })
export const cancelVisitBody = z.strictObject({ reason: words(300), rowVersion: z.int().positive() })
/** Nothing is said beside the address; anything else is a mistake. */
export const noBody = z.strictObject({})
export const rowVersionBody = z.strictObject({ rowVersion: z.int().positive() })
export const missingStepBody = z.strictObject({ step: z.enum(['call', 'text', 'second-call', 'found', 'not-found']), outcome: words(300) })
export type MissingStepBody = z.infer<typeof missingStepBody>
export const bookListBody = z.strictObject({
  bookings: z.array(z.strictObject({ pathwayId: z.uuid(), placeId: z.uuid(), despite: words(300).optional() })).min(1).max(40),
})
export type BookListBody = z.infer<typeof bookListBody>

const instant = z.iso.datetime({ error: 'Use a date and time.' })
const room = z.string().trim().min(1, 'Name the room.').max(40, 'A room has at most 40 letters.')
const placeMinutes = z.int('Whole minutes.').min(5, 'At least 5 minutes.').max(120, 'At most 120 minutes.')
const placeCount = z.int('A whole number.').min(1, 'At least one place.').max(40, 'At most 40 places at once.')

export const addSessionBody = z.strictObject({ siteId: z.uuid(), kind: z.enum(sessionKinds), room, startsAt: instant, places: placeCount, minutes: placeMinutes })
export type AddSessionBody = z.infer<typeof addSessionBody>
export const changeSessionBody = z.strictObject({ room, rowVersion: z.int().positive() })
export const addPlacesBody = z.strictObject({ places: placeCount, minutes: placeMinutes, rowVersion: z.int().positive(), /** Where the first new place begins; after the last one when left out. */ startsAt: instant.optional() })
export type AddPlacesBody = z.infer<typeof addPlacesBody>
export const proposalQuery = z.object({ siteId: z.uuid().optional() })
