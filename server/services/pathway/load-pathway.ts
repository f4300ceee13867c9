import { and, eq } from 'drizzle-orm'
import type { Queryable, Transaction } from '#server/db/client'
import { pathways, patients, sites } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import type { PathwayAct } from '#server/policies/pathway'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { DomainError } from '#shared/domain/errors'
import type { Actor } from '#shared/domain/people/vocabulary'

const query = (db: Queryable, actor: Actor, id: string) => db.select({ pathway: pathways, patient: patients, site: sites }).from(pathways)
  .innerJoin(patients, eq(patients.id, pathways.patientId))
  .innerJoin(sites, eq(sites.id, pathways.siteId))
  .where(and(eq(pathways.id, id), pathwaysInScope(actor)))

const notFound = () => new DomainError('pathway.not-found', 'There is no such pathway.')

/** One pathway with its patient and site, if the caller may see it; else not found, whether it exists or not. */
export async function loadPathway(db: Queryable, actor: Actor, id: string) {
  const [row] = await query(db, actor, id)
  if (!row) throw notFound()
  return row
}
export type LoadedPathway = Awaited<ReturnType<typeof loadPathway>>

export interface LockInput { pathwayId: string, act: PathwayAct, refusal: string, rowVersion?: number }

/**
 * The pathway, locked until the transaction ends, for somebody who may do this with it. With a `rowVersion` the caller says
 * what they saw; a pathway that moved meanwhile is refused with what it is now.
 */
export async function lockPathway(tx: Transaction, ctx: ServiceContext, { pathwayId, act, refusal, rowVersion }: LockInput): Promise<LoadedPathway> {
  const [row] = await query(tx, ctx.actor, pathwayId).for('update', { of: pathways })
  if (!row) throw notFound()
  if (!may(ctx.actor, act, row.pathway.siteId)) throw new DomainError('pathway.not-allowed', refusal)
  if (rowVersion !== undefined && row.pathway.rowVersion !== rowVersion) throw staleness(row.pathway)
  return row
}

function staleness({ stage, state, holdReason, lookAgainOn, closeReason, rowVersion }: LoadedPathway['pathway']): DomainError {
  return new DomainError('pathway.stale', 'Somebody changed this pathway meanwhile. Look at it again.', { detail: { current: { stage, state, holdReason, lookAgainOn, closeReason, rowVersion } } })
}

/** Clinical work before surgery is for an open pathway; a held or closed one says why it waits. */
export function requireOpen({ state, holdReason, closeReason }: LoadedPathway['pathway']): void {
  if (state === 'closed') throw new DomainError('pathway.closed', 'This pathway is closed.', { detail: { closeReason } })
  if (state === 'held') throw new DomainError('pathway.held', 'This pathway is on hold. Release it first.', { detail: { holdReason } })
}
