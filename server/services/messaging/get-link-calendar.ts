import type { SystemContext } from '#server/services/context'
import { requireLink } from '#server/services/messaging/load-link'
import { visitCalendar } from '#server/services/messaging/visit-calendar'
import { DomainError } from '#shared/domain/errors'

/** The visit of a patient's page as a calendar file. */
export async function getLinkCalendar(ctx: SystemContext, input: { token: string, linkId: string | undefined }): Promise<string> {
  const { visit, site } = await requireLink(ctx.db, { ...input, now: ctx.now })
  if (!visit) throw new DomainError('messaging.not-found', 'No visit is booked now.')
  return visitCalendar({ visit, site, cancelled: false, now: ctx.now })
}
