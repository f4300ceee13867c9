import { and, eq, sql } from 'drizzle-orm'
import { refusedConstraint } from '#server/db/refused-constraint'
import { pathwayEvents, sites, visits } from '#server/db/schema/index'
import { mayBook } from '#server/policies/visit'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { queueVisitMessages, withdrawMessages } from '#server/services/messaging/queue-messages'
import { lockPlace } from '#server/services/visit/claim-place'
import { loadVisit } from '#server/services/visit/load-visit'
import { DomainError } from '#shared/domain/errors'

/** Moves a waiting visit to another place: the old row keeps its history as `moved`, the patient is told. */
export async function moveVisit(ctx: ServiceContext, input: { visitId: string, placeId: string, rowVersion: number }) {
  try {
    const moved = await ctx.db.transaction(async (tx) => {
      const loaded = await loadVisit(tx, ctx.actor, input.visitId)
      if (!mayBook(ctx.actor, loaded.visit.siteId)) throw new DomainError('visit.not-allowed', 'You may not move visits at this site.')
      const place = await lockPlace(tx, { placeId: input.placeId })
      if (!mayBook(ctx.actor, place.siteId)) throw new DomainError('visit.not-allowed', 'You may not book at that site.')
      if (place.startsAt <= ctx.now) throw new DomainError('visit.place-past', 'That time has passed. Choose a later one.')
      const [left] = await tx.update(visits).set({ state: 'moved', rowVersion: sql`${visits.rowVersion} + 1` })
        .where(and(eq(visits.id, input.visitId), eq(visits.rowVersion, input.rowVersion), sql`${visits.state} in ('booked', 'missing')`)).returning()
      if (!left) throw new DomainError('visit.stale', 'Somebody changed this visit meanwhile. Look at it again.', { detail: { current: { state: loaded.visit.state, rowVersion: loaded.visit.rowVersion, startsAt: loaded.visit.startsAt } } })
      const [visit] = await tx.insert(visits).values({ pathwayId: left.pathwayId, patientId: left.patientId, placeId: place.placeId, siteId: place.siteId, kind: left.kind, startsAt: place.startsAt, bookedBy: ctx.actor.personId, bookedAt: ctx.now, note: left.note }).returning()
      const [site] = await tx.select().from(sites).where(eq(sites.id, place.siteId))
      if (!visit || !site) throw new DomainError('visit.conflict', 'The visit could not be moved.')
      await withdrawMessages(tx, { visitId: left.id, why: 'moved', now: ctx.now })
      await queueVisitMessages(tx, { visit, patient: loaded.patient, pathway: loaded.pathway, site, now: ctx.now, change: 'moved' })
      await tx.insert(pathwayEvents).values({ pathwayId: visit.pathwayId, at: ctx.now, kind: 'visit-moved', personId: ctx.actor.personId, words: 'Visit moved', detail: { from: left.id, to: visit.id } })
      await appendAudit(tx, { at: ctx.now, event: 'visit.moved', personId: ctx.actor.personId, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId, payload: { from: left.id } })
      return visit
    })
    await notifyLive(ctx.db, 'visit', moved.siteId, [moved.id])
    return moved
  }
  catch (error) {
    if (refusedConstraint(error) === 'visits_one_per_place') throw new DomainError('visit.place-taken', 'That place was just taken. Choose another.')
    throw error
  }
}
