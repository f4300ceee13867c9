import { and, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { pathwayEvents, pathways, patients, sites, visits } from '#server/db/schema/index'
import { mayBook } from '#server/policies/visit'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { queueVisitMessages } from '#server/services/messaging/queue-messages'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { checkSuitable } from '#server/services/visit/check-suitable'
import { lockPlace } from '#server/services/visit/claim-place'
import { listAlternatives } from '#server/services/visit/list-alternatives'
import type { BookVisitBody } from '#shared/contracts/visit'
import { DomainError } from '#shared/domain/errors'

const triesWhenBeaten = 12

/**
 * Books one visit on one place. Two nurses cannot both win a place: the unique index decides. A booking that asked for
 * any place of a session and was beaten to one tries the next until none is left.
 */
export async function bookVisit(ctx: ServiceContext, input: BookVisitBody) {
  for (let attempt = 1; ; attempt++) {
    try {
      const visit = await ctx.db.transaction(tx => bookInTransaction(ctx, tx, input))
      await notifyLive(ctx.db, 'visit', visit.siteId, [visit.id])
      return visit
    }
    catch (error) {
      const constraint = refusedConstraint(error)
      if (constraint === 'visits_one_per_place') {
        if (input.sessionId && attempt < triesWhenBeaten) continue
        throw new DomainError('visit.place-taken', 'That place was just taken. Choose another.', { detail: { alternatives: await listAlternatives(ctx, input.kind) } })
      }
      if (error instanceof DomainError && (error.code === 'visit.place-taken' || error.code === 'visit.place-closed')) throw new DomainError(error.code, error.message, { detail: { alternatives: await listAlternatives(ctx, input.kind) } })
      if (constraint === 'visits_one_waiting_per_kind') throw new DomainError('visit.duplicate', 'This eye already has a visit of this kind waiting. Move that one instead.')
      if (constraint === 'visits_place_open') throw new DomainError('visit.place-closed', 'This session or place is closed. Choose another.')
      throw error
    }
  }
}

export async function bookInTransaction(ctx: ServiceContext, tx: Transaction, input: BookVisitBody) {
  const [row] = await tx.select({ pathway: pathways, patient: patients }).from(pathways)
    .innerJoin(patients, eq(patients.id, pathways.patientId))
    .where(and(eq(pathways.id, input.pathwayId), pathwaysInScope(ctx.actor)))
    .for('share', { of: pathways })
  if (!row) throw new DomainError('pathway.not-found', 'There is no such pathway.')
  if (row.pathway.state === 'closed') throw new DomainError('pathway.closed', 'This pathway is closed. Nothing can be booked for it.')
  // Before any place is looked at: who may not book learns nothing about which places are free.
  if (!mayBook(ctx.actor, row.pathway.siteId)) throw new DomainError('visit.not-allowed', 'You may not book for this site.')
  const place = await lockPlace(tx, input)
  if (!mayBook(ctx.actor, place.siteId)) throw new DomainError('visit.not-allowed', 'You may not book at this site.')
  if (place.startsAt <= ctx.now) throw new DomainError('visit.place-past', 'That time has passed. Choose a later one.', { fields: [{ field: 'placeId', code: 'past', message: 'That time has passed.' }] })

  const unmet = input.kind === 'day-one' ? await checkSuitable(tx, { ...row.pathway, needsTransport: row.patient.needsTransport, interpreterLanguage: row.patient.interpreterLanguage }, place.placeId, ctx.now, input.despite) : []

  const [visit] = await tx.insert(visits).values({
    pathwayId: row.pathway.id, patientId: row.patient.id, placeId: place.placeId, siteId: place.siteId, kind: input.kind,
    startsAt: place.startsAt, bookedBy: ctx.actor.personId, bookedAt: ctx.now, note: input.note,
  }).returning()
  if (!visit) throw new DomainError('visit.conflict', 'The visit could not be booked.')
  const [site] = await tx.select().from(sites).where(eq(sites.id, place.siteId))
  if (!site) throw new DomainError('visit.not-found', 'There is no such site.')
  await tx.insert(pathwayEvents).values({ pathwayId: visit.pathwayId, at: ctx.now, kind: 'visit-booked', personId: ctx.actor.personId, words: 'Visit booked', detail: { visitId: visit.id, kind: visit.kind, ...(unmet.length ? { despite: input.despite, unmet } : {}) } })
  await appendAudit(tx, { at: ctx.now, event: 'visit.booked', personId: ctx.actor.personId, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId, payload: unmet.length ? { unmet } : {} })
  await queueVisitMessages(tx, { visit, patient: row.patient, pathway: row.pathway, site, now: ctx.now })
  return visit
}
