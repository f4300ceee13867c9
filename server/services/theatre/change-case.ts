import { and, eq } from 'drizzle-orm'
import { pathways, patients, theatreCases } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { lockList } from '#server/services/theatre/lock-list'
import { recordListChange, requireReason } from '#server/services/theatre/record-list-change'
import { retimeList } from '#server/services/theatre/retime-list'
import type { ChangeCaseBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

/** What a waiting case needs of its place, and the minutes it is given. */
export async function changeCase(ctx: ServiceContext, input: ChangeCaseBody & { caseId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const [found] = await tx.select({ theatreCase: theatreCases, patientName: patients.name }).from(theatreCases).innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).innerJoin(patients, eq(patients.id, pathways.patientId)).where(and(eq(theatreCases.id, input.caseId), pathwaysInScope(ctx.actor)))
    if (!found) throw new DomainError('theatre.not-found', 'There is no such case.')
    const list = await lockList(tx, ctx.actor, found.theatreCase.listId)
    if (!may(ctx.actor, 'runTheatre', list.siteId)) throw new DomainError('theatre.not-allowed', 'A coordinator or surgeon of this site changes theatre lists.')
    if (list.rowVersion !== input.rowVersion) throw new DomainError('theatre.stale', 'Somebody changed this list meanwhile. Look at it again.', { detail: { current: { rowVersion: list.rowVersion, constraints: found.theatreCase.constraints, plannedMinutes: found.theatreCase.plannedMinutes } } })
    requireReason(list, input.reason)
    const [changed] = await tx.update(theatreCases).set({ constraints: input.constraints, plannedMinutes: input.plannedMinutes, minutesByHand: found.theatreCase.minutesByHand || input.plannedMinutes !== found.theatreCase.plannedMinutes })
      .where(and(eq(theatreCases.id, input.caseId), eq(theatreCases.state, 'planned'))).returning()
    if (!changed) throw new DomainError('theatre.conflict', 'This case is under way, done or cancelled already.')
    const later = await recordListChange(tx, ctx, list, { kind: 'constraints', words: `What ${found.patientName} needs was changed`, reason: input.reason, detail: { caseId: changed.id } })
    await appendAudit(tx, { at: ctx.now, event: 'theatre.case-constraints', personId: ctx.actor.personId, subjectKind: 'pathway', subjectId: changed.pathwayId, siteId: list.siteId, payload: { caseId: changed.id } })
    await retimeList(tx, later, ctx.now)
    return { case: changed, siteId: list.siteId }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, [done.case.pathwayId])
  return done.case
}
