import { and, eq, inArray } from 'drizzle-orm'
import type { Queryable, Transaction } from '#server/db/client'
import { pathways, theatreCases, theatreLists } from '#server/db/schema/index'
import { mayPrintList } from '#server/policies/theatre'
import { pathwayScope } from '#server/policies/scope'
import type { PathwayAct } from '#server/policies/pathway'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { lockList } from '#server/services/theatre/lock-list'
import { DomainError } from '#shared/domain/errors'

/** One case of a theatre where the caller works; else not found, whether it exists or not. */
export async function findCase(db: Queryable, ctx: ServiceContext, caseId: string) {
  const { siteIds } = pathwayScope(ctx.actor)
  const [found] = siteIds.length
    ? await db.select({ theatreCase: theatreCases, list: theatreLists }).from(theatreCases).innerJoin(theatreLists, eq(theatreLists.id, theatreCases.listId)).innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).where(and(eq(theatreCases.id, caseId), inArray(theatreLists.siteId, siteIds)))
    : []
  if (!found || !mayPrintList(ctx.actor, found.list.siteId)) throw new DomainError('theatre.not-found', 'There is no such case.')
  return found
}

/** The case with its list and its pathway locked, in that order, for somebody who may do this with it now. */
export async function lockCase(tx: Transaction, ctx: ServiceContext, caseId: string, act: PathwayAct, refusal: string) {
  const found = await findCase(tx, ctx, caseId)
  const list = await lockList(tx, ctx.actor, found.list.id)
  const loaded = await lockPathway(tx, ctx, { pathwayId: found.theatreCase.pathwayId, act, refusal })
  requireOpen(loaded.pathway)
  const [theatreCase] = await tx.select().from(theatreCases).where(eq(theatreCases.id, caseId))
  if (!theatreCase || theatreCase.state === 'cancelled' || theatreCase.state === 'done') throw new DomainError('theatre.conflict', theatreCase?.state === 'done' ? 'This case is done.' : 'This case was taken off its list.')
  if (loaded.pathway.stage !== 'surgery') throw new DomainError('pathway.transition-not-allowed', 'This eye is not ready for surgery yet: see its pathway for what is missing.')
  return { theatreCase, list, loaded }
}
