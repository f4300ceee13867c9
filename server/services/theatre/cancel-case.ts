import { and, eq } from 'drizzle-orm'
import { pathways, theatreCases } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { withdrawMessages } from '#server/services/messaging/queue-messages'
import { lockPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { lockList } from '#server/services/theatre/lock-list'
import { retimeList } from '#server/services/theatre/retime-list'
import { DomainError } from '#shared/domain/errors'

/** Takes a waiting case off its list. The eye keeps its stage and says that it has no list; the cases behind it move up. */
export async function cancelCase(ctx: ServiceContext, input: { caseId: string, reason: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const [found] = await tx.select({ theatreCase: theatreCases }).from(theatreCases).innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).where(and(eq(theatreCases.id, input.caseId), pathwaysInScope(ctx.actor)))
    if (!found) throw new DomainError('theatre.not-found', 'There is no such case.')
    const list = await lockList(tx, ctx.actor, found.theatreCase.listId)
    const loaded = await lockPathway(tx, ctx, { pathwayId: found.theatreCase.pathwayId, act: 'runTheatre', refusal: 'A coordinator or surgeon of this site changes theatre lists.' })
    const [cancelled] = await tx.update(theatreCases).set({ state: 'cancelled', cancelReason: input.reason }).where(and(eq(theatreCases.id, input.caseId), eq(theatreCases.state, 'planned'))).returning()
    if (!cancelled) throw new DomainError('theatre.conflict', 'This case is under way, done or cancelled already.')
    await withdrawMessages(tx, { pathwayId: loaded.pathway.id, kinds: ['surgery.reminder'], why: 'cancelled', now: ctx.now })
    await recordEvent(tx, ctx, loaded, { kind: 'case-cancelled', words: `Taken off the list: ${input.reason}`, audit: 'theatre.case-cancelled', payload: { caseId: cancelled.id, listId: list.id }, change: { surgeryAt: null } })
    await retimeList(tx, list, ctx.now)
    return { case: cancelled, siteId: list.siteId, pathwayId: loaded.pathway.id }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, [done.pathwayId])
  return done.case
}
