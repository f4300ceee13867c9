import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'

/** Records what is to happen with the other eye, which discharge asks for. */
export async function decideFellowEye(ctx: ServiceContext, input: { pathwayId: string, decision: string, rowVersion: number }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { ...input, act: 'decideFellowEye', refusal: 'An optometrist or surgeon of this site decides about the fellow eye.' })
    requireOpen(loaded.pathway)
    return recordEvent(tx, ctx, loaded, { kind: 'fellow-eye-decided', words: `Fellow eye: ${input.decision}`, audit: 'pathway.decided', payload: { about: 'fellow-eye' }, change: { fellowEyeDecision: input.decision } })
  })
  await notifyLive(ctx.db, 'pathway', changed.siteId, [changed.id])
  return changed
}
