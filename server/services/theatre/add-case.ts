import { desc, eq, sql } from 'drizzle-orm'
import { refusedConstraint } from '#server/db/refused-constraint'
import { riskAssessments, theatreCases } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockList } from '#server/services/theatre/lock-list'
import { plannedMinutesOf } from '#server/services/theatre/predict-minutes'
import { retimeList } from '#server/services/theatre/retime-list'
import { DomainError } from '#shared/domain/errors'

/** Puts one eye on one list, last, with the minutes that its risk predicts unless the caller says otherwise. */
export async function addCase(ctx: ServiceContext, input: { listId: string, pathwayId: string, plannedMinutes?: number }) {
  try {
    const added = await ctx.db.transaction(async (tx) => {
      const list = await lockList(tx, ctx.actor, input.listId)
      const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'runTheatre', refusal: 'A coordinator or surgeon of this site fills theatre lists.' })
      requireOpen(loaded.pathway)
      const { pathway } = loaded
      if (pathway.operatedAt || (pathway.stage !== 'biometry' && pathway.stage !== 'surgery')) throw new DomainError('pathway.transition-not-allowed', 'An eye goes on a list after its referral is accepted and before it is operated.')
      if (list.siteId !== pathway.siteId) throw new DomainError('theatre.not-found', 'There is no such list at this site.')
      if (list.lockedAt || list.endsAt <= ctx.now) throw new DomainError('theatre.conflict', 'This list is closed.')
      const [[risk], [last]] = await Promise.all([
        tx.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, pathway.id)).orderBy(desc(riskAssessments.version)).limit(1),
        tx.select({ position: sql<number>`coalesce(max(${theatreCases.position}), 0)::int` }).from(theatreCases).where(eq(theatreCases.listId, list.id)),
      ])
      const [added] = await tx.insert(theatreCases).values({ listId: list.id, pathwayId: pathway.id, position: (last?.position ?? 0) + 1, plannedMinutes: input.plannedMinutes ?? plannedMinutesOf(risk) }).returning()
      if (!added) throw new DomainError('theatre.conflict', 'The case could not be added.')
      await recordEvent(tx, ctx, loaded, { kind: 'case-added', words: `On the list of ${list.room}`, audit: 'theatre.case-added', payload: { caseId: added.id, listId: list.id } })
      await retimeList(tx, list, ctx.now)
      return { case: added, siteId: list.siteId }
    })
    await notifyLive(ctx.db, 'pathway', added.siteId, [input.pathwayId])
    return added.case
  }
  catch (error) {
    if (refusedConstraint(error) === 'theatre_cases_live') throw new DomainError('theatre.conflict', 'This eye is on a list already. Cancel that case first.')
    throw error
  }
}
