import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { DomainError } from '#shared/domain/errors'

/** What the other kind of first check found. It stands in for the day-one review only where that check was decided. */
export async function recordFirstCheck(ctx: ServiceContext, input: { pathwayId: string, found: string, rowVersion: number }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { ...input, act: 'recordFirstCheck', refusal: 'A nurse, optometrist or surgeon of this site records the first check.' })
    requireOpen(loaded.pathway)
    if (!loaded.pathway.otherFirstCheck) throw new DomainError('pathway.transition-not-allowed', 'No other first check is decided for this eye: sign its day-one review instead.')
    return recordEvent(tx, ctx, loaded, { kind: 'first-check-recorded', words: input.found, audit: 'pathway.decided', payload: { about: 'first-check-result' }, change: { dayOneAt: loaded.pathway.dayOneAt ?? ctx.now } })
  })
  await notifyLive(ctx.db, 'pathway', changed.siteId, [changed.id])
  return changed
}
