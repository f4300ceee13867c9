import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { bookVisit } from '#server/services/visit/book-visit'
import type { BookListBody } from '#shared/contracts/visit'
import { DomainError } from '#shared/domain/errors'

/**
 * Confirms a proposal. Each row is its own act, so that places taken meanwhile cost only their own rows; every refusal
 * comes back with its reason and nothing is dropped silently.
 */
export async function bookList(ctx: ServiceContext, input: BookListBody) {
  const booked: { pathwayId: string, visitId: string, startsAt: Date }[] = []
  const refused: { pathwayId: string, code: string, reason: string }[] = []
  for (const row of input.bookings) {
    try {
      const visit = await bookVisit(ctx, { pathwayId: row.pathwayId, placeId: row.placeId, kind: 'day-one', note: '', despite: row.despite })
      booked.push({ pathwayId: row.pathwayId, visitId: visit.id, startsAt: visit.startsAt })
    }
    catch (error) {
      if (!(error instanceof DomainError)) throw error
      refused.push({ pathwayId: row.pathwayId, code: error.code, reason: error.message })
    }
  }
  await notifyLive(ctx.db, 'visit', null, booked.map(each => each.visitId))
  return { booked, refused }
}
