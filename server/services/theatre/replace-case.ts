import { and, eq } from 'drizzle-orm'
import { refusedConstraint } from '#server/db/refused-constraint'
import { pathways, theatreCases } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { insertCase } from '#server/services/theatre/add-case'
import { takeOff } from '#server/services/theatre/cancel-case'
import { lockList } from '#server/services/theatre/lock-list'
import { recordListChange } from '#server/services/theatre/record-list-change'
import { retimeList } from '#server/services/theatre/retime-list'
import type { ReplaceCaseBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

/** Another eye takes the place of one that cannot come, with the reason, in one act: the place is never empty and never held twice. */
export async function replaceCase(ctx: ServiceContext, input: ReplaceCaseBody & { caseId: string }) {
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const [found] = await tx.select({ listId: theatreCases.listId, pathwayId: theatreCases.pathwayId }).from(theatreCases).innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).where(and(eq(theatreCases.id, input.caseId), pathwaysInScope(ctx.actor)))
      if (!found) throw new DomainError('theatre.not-found', 'There is no such case.')
      if (found.pathwayId === input.pathwayId) throw new DomainError('theatre.conflict', 'This eye is that case already.')
      const list = await lockList(tx, ctx.actor, found.listId)
      const cancelled = await takeOff(tx, ctx, list, input)
      const added = await insertCase(tx, ctx, list, { pathwayId: input.pathwayId, position: cancelled.case.position })
      const later = await recordListChange(tx, ctx, list, { kind: 'replaced', words: `${added.patientName} in place of ${cancelled.patientName}`, reason: input.reason, detail: { cancelled: cancelled.case.id, added: added.case.id } })
      await retimeList(tx, later, ctx.now)
      return { case: added.case, siteId: list.siteId, pathwayIds: [found.pathwayId, input.pathwayId] }
    })
    await notifyLive(ctx.db, 'pathway', done.siteId, done.pathwayIds)
    return done.case
  }
  catch (error) {
    if (refusedConstraint(error) === 'theatre_cases_live') throw new DomainError('theatre.conflict', 'This eye is on a list already. Cancel that case first.')
    throw error
  }
}
