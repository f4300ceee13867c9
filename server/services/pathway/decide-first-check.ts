import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { DomainError } from '#shared/domain/errors'

/**
 * A surgeon's decision that the first check is another one than a day-one visit. Where the site's table asks for a check in person
 * the decision is refused: the table is the site's signed policy, and missing data count as required there.
 */
export async function decideFirstCheck(ctx: ServiceContext, input: { pathwayId: string, decision: string, rowVersion: number }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { ...input, act: 'decideFirstCheck', refusal: 'A surgeon of this site decides how an eye is checked first.' })
    requireOpen(loaded.pathway)
    if (!loaded.pathway.operatedAt || (loaded.pathway.stage !== 'surgery' && loaded.pathway.stage !== 'day-one')) throw new DomainError('pathway.transition-not-allowed', 'The first check is decided once the operation note is signed, and before follow-up.')
    const need = loaded.pathway.dayOneNeed as { inPerson?: boolean, reasons?: { sentence: string }[], unknown?: string[] } | null
    if (need?.inPerson !== false) throw new DomainError('pathway.first-check-required', 'This eye needs its day-one check in person.', { detail: { reasons: need?.reasons?.map(each => each.sentence) ?? [], unknown: need?.unknown ?? [] } })
    return recordEvent(tx, ctx, loaded, { kind: 'first-check-decided', words: `First check: ${input.decision}`, audit: 'pathway.decided', payload: { about: 'first-check' }, change: { otherFirstCheck: input.decision } })
  })
  await notifyLive(ctx.db, 'visit', changed.siteId, [changed.id])
  return changed
}
