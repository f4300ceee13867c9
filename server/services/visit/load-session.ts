import { and, eq, inArray } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { clinicSessions, sites } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import { mayRunSessions } from '#server/policies/visit'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

/** One session of the caller's sites, locked, for those who may change it and saw its newest state. */
export async function lockSession(tx: Transaction, ctx: ServiceContext, input: { sessionId: string, rowVersion?: number }) {
  const { siteIds } = pathwayScope(ctx.actor)
  const [row] = siteIds.length
    ? await tx.select({ session: clinicSessions, zone: sites.zone }).from(clinicSessions).innerJoin(sites, eq(sites.id, clinicSessions.siteId)).where(and(eq(clinicSessions.id, input.sessionId), inArray(clinicSessions.siteId, siteIds))).for('update', { of: clinicSessions })
    : []
  if (!row) throw new DomainError('visit.session-not-found', 'There is no such clinic session.')
  if (!mayRunSessions(ctx.actor, row.session.siteId)) throw new DomainError('visit.not-allowed', 'A coordinator of this site changes clinic sessions.')
  if (row.session.closedAt) throw new DomainError('visit.already-closed', 'This session is closed.')
  if (input.rowVersion !== undefined && row.session.rowVersion !== input.rowVersion) throw new DomainError('visit.stale', 'Somebody changed this session meanwhile. Look at it again.', { detail: { current: { room: row.session.room, rowVersion: row.session.rowVersion } } })
  return row
}
