import { eq } from 'drizzle-orm'
import { practices } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { DomainError } from '#shared/domain/errors'

/** Shares one pathway with a community practice, or takes it back with `null`. Its other pathways stay unseen. */
export async function sharePathway(ctx: ServiceContext, input: { pathwayId: string, practiceId: string | null, rowVersion: number }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { ...input, act: 'share', refusal: 'The team of this site shares a pathway.' })
    if (loaded.pathway.state === 'closed' && input.practiceId) throw new DomainError('pathway.closed', 'A closed pathway is shared with nobody new.')
    const [practice] = input.practiceId ? await tx.select().from(practices).where(eq(practices.id, input.practiceId)) : []
    if (input.practiceId && !practice) throw new DomainError('pathway.invalid', 'There is no such practice.', { fields: [{ field: 'practiceId', code: 'unknown', message: 'Choose a practice of the list.' }] })
    return recordEvent(tx, ctx, loaded, { kind: 'shared', words: practice ? `Shared with ${practice.name}` : 'Sharing ended', audit: 'pathway.shared', payload: { practiceId: input.practiceId }, change: { practiceId: input.practiceId } })
  })
  await notifyLive(ctx.db, 'pathway', changed.siteId, [changed.id])
  return changed
}
