import { and, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import type { theatreLists } from '#server/db/schema/index'
import { pathways, theatreCases } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { withdrawMessages } from '#server/services/messaging/queue-messages'
import { lockPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { lockList } from '#server/services/theatre/lock-list'
import { recordListChange } from '#server/services/theatre/record-list-change'
import { retimeList } from '#server/services/theatre/retime-list'
import { DomainError } from '#shared/domain/errors'

/** Takes a waiting case off its list. The eye keeps its stage and says that it has no list; the cases behind it move up. */
export async function cancelCase(ctx: ServiceContext, input: { caseId: string, reason: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const [found] = await tx.select({ listId: theatreCases.listId }).from(theatreCases).innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).where(and(eq(theatreCases.id, input.caseId), pathwaysInScope(ctx.actor)))
    if (!found) throw new DomainError('theatre.not-found', 'There is no such case.')
    const list = await lockList(tx, ctx.actor, found.listId)
    const cancelled = await takeOff(tx, ctx, list, input)
    const later = await recordListChange(tx, ctx, list, { kind: 'cancelled', words: `${cancelled.patientName} taken off`, reason: input.reason, detail: { cancelled: cancelled.case.id } })
    await retimeList(tx, later, ctx.now)
    return { case: cancelled.case, siteId: list.siteId }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, [done.case.pathwayId])
  return done.case
}

/** The case is off, for an act that holds the list: no reminder goes out any more, and the eye says why. */
export async function takeOff(tx: Transaction, ctx: ServiceContext, list: typeof theatreLists.$inferSelect, input: { caseId: string, reason: string }) {
  const [theatreCase] = await tx.select().from(theatreCases).where(eq(theatreCases.id, input.caseId))
  if (!theatreCase) throw new DomainError('theatre.not-found', 'There is no such case.')
  const loaded = await lockPathway(tx, ctx, { pathwayId: theatreCase.pathwayId, act: 'runTheatre', refusal: 'A coordinator or surgeon of this site changes theatre lists.' })
  const [cancelled] = await tx.update(theatreCases).set({ state: 'cancelled', cancelReason: input.reason }).where(and(eq(theatreCases.id, input.caseId), eq(theatreCases.state, 'planned'))).returning()
  if (!cancelled) throw new DomainError('theatre.conflict', 'This case is under way, done or cancelled already.')
  await withdrawMessages(tx, { pathwayId: loaded.pathway.id, kinds: ['surgery.reminder'], why: 'cancelled', now: ctx.now })
  await recordEvent(tx, ctx, loaded, { kind: 'case-cancelled', words: `Taken off the list: ${input.reason}`, audit: 'theatre.case-cancelled', payload: { caseId: cancelled.id, listId: list.id }, change: { surgeryAt: null } })
  return { case: cancelled, patientName: loaded.patient.name }
}
