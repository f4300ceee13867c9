import { and, eq, sql } from 'drizzle-orm'
import { pathwayEvents, visits } from '#server/db/schema/index'
import { mayBook } from '#server/policies/visit'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { queueVisitMessages, withdrawMessages } from '#server/services/messaging/queue-messages'
import { loadVisit } from '#server/services/visit/load-visit'
import { DomainError } from '#shared/domain/errors'

/** Cancels a waiting visit with its reason, gives the place back and tells the patient. */
export async function cancelVisit(ctx: ServiceContext, input: { visitId: string, reason: string, rowVersion: number }) {
  const cancelled = await ctx.db.transaction(async (tx) => {
    const loaded = await loadVisit(tx, ctx.actor, input.visitId)
    if (!mayBook(ctx.actor, loaded.visit.siteId)) throw new DomainError('visit.not-allowed', 'You may not cancel visits at this site.')
    const [visit] = await tx.update(visits).set({ state: 'cancelled', cancelReason: input.reason, rowVersion: sql`${visits.rowVersion} + 1` })
      .where(and(eq(visits.id, input.visitId), eq(visits.rowVersion, input.rowVersion), sql`${visits.state} in ('booked', 'missing')`)).returning()
    if (!visit) throw new DomainError('visit.stale', 'Somebody changed this visit meanwhile. Look at it again.', { detail: { current: { state: loaded.visit.state, rowVersion: loaded.visit.rowVersion, startsAt: loaded.visit.startsAt } } })
    await withdrawMessages(tx, { visitId: visit.id, why: 'cancelled', now: ctx.now })
    await queueVisitMessages(tx, { visit, patient: loaded.patient, pathway: loaded.pathway, site: loaded.site, now: ctx.now, change: 'cancelled' })
    await tx.insert(pathwayEvents).values({ pathwayId: visit.pathwayId, at: ctx.now, kind: 'visit-cancelled', personId: ctx.actor.personId, words: 'Visit cancelled', detail: { visitId: visit.id, reason: input.reason } })
    await appendAudit(tx, { at: ctx.now, event: 'visit.cancelled', personId: ctx.actor.personId, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId })
    return visit
  })
  await notifyLive(ctx.db, 'visit', cancelled.siteId, [cancelled.id])
  return cancelled
}
