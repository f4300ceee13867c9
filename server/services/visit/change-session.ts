import { and, asc, eq, inArray, isNull, lt, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { clinicSessions, patients, sessionPlaces, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { claimRoom } from '#server/services/visit/add-session'
import { lockSession } from '#server/services/visit/load-session'
import type { AddPlacesBody } from '#shared/contracts/visit'
import { DomainError } from '#shared/domain/errors'

const minuteMs = 60_000
const nextVersion = { rowVersion: sql`${clinicSessions.rowVersion} + 1` }

/** Another room for the whole session. Whoever is booked keeps their time. */
export async function changeSession(ctx: ServiceContext, input: { sessionId: string, room: string, rowVersion: number }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const { session } = await lockSession(tx, ctx, input)
    await claimRoom(tx, { ...session, room: input.room, sessionId: session.id })
    const [row] = await tx.update(clinicSessions).set({ room: input.room, ...nextVersion }).where(eq(clinicSessions.id, session.id)).returning()
    await appendAudit(tx, { at: ctx.now, event: 'visit.session-changed', personId: ctx.actor.personId, subjectKind: 'session', subjectId: session.id, siteId: session.siteId })
    return row ?? session
  })
  await notifyLive(ctx.db, 'visit', changed.siteId, [changed.id])
  return changed
}

/** More capacity: new places after the last one, or from a named time on. Existing places and visits stay as they are. */
export async function addPlaces(ctx: ServiceContext, input: AddPlacesBody & { sessionId: string }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const { session } = await lockSession(tx, ctx, input)
    const from = input.startsAt ? new Date(input.startsAt) : session.endsAt
    const endsAt = new Date(from.getTime() + input.places * input.minutes * minuteMs)
    if (from < ctx.now) throw new DomainError('visit.invalid', 'That time has passed.', { fields: [{ field: 'startsAt', code: 'past', message: 'That time has passed. Choose a later one.' }] })
    const span = { startsAt: from < session.startsAt ? from : session.startsAt, endsAt: endsAt > session.endsAt ? endsAt : session.endsAt }
    await claimRoom(tx, { siteId: session.siteId, room: session.room, ...span, sessionId: session.id })
    const [overlap] = await tx.select({ id: sessionPlaces.id }).from(sessionPlaces)
      .where(and(eq(sessionPlaces.sessionId, session.id), isNull(sessionPlaces.closedAt), lt(sessionPlaces.startsAt, endsAt), sql`${sessionPlaces.startsAt} + make_interval(mins => ${sessionPlaces.minutes}) > ${from.toISOString()}::timestamptz`)).limit(1)
    if (overlap) throw new DomainError('visit.conflict', 'The new places overlap one that is there already.', { fields: [{ field: 'startsAt', code: 'overlaps', message: 'Another place of this session lies in that time.' }] })
    await tx.insert(sessionPlaces).values(Array.from({ length: input.places }, (_, place) => ({ sessionId: session.id, startsAt: new Date(from.getTime() + place * input.minutes * minuteMs), minutes: input.minutes })))
    const [row] = await tx.update(clinicSessions).set({ ...span, ...nextVersion }).where(eq(clinicSessions.id, session.id)).returning()
    await appendAudit(tx, { at: ctx.now, event: 'visit.places-added', personId: ctx.actor.personId, subjectKind: 'session', subjectId: session.id, siteId: session.siteId, payload: { places: input.places } })
    return row ?? session
  })
  await notifyLive(ctx.db, 'visit', changed.siteId, [changed.id])
  return changed
}

/** Closes a session for good. Whoever waits in it is named, and must be moved or cancelled first: nobody is dropped with a room. */
export async function closeSession(ctx: ServiceContext, input: { sessionId: string, rowVersion: number }) {
  const closed = await ctx.db.transaction(async (tx) => {
    const { session } = await lockSession(tx, ctx, input)
    await refuseWhileBooked(tx, await tx.select({ id: sessionPlaces.id }).from(sessionPlaces).where(eq(sessionPlaces.sessionId, session.id)).for('update'))
    const [row] = await tx.update(clinicSessions).set({ closedAt: ctx.now, ...nextVersion }).where(eq(clinicSessions.id, session.id)).returning()
    await appendAudit(tx, { at: ctx.now, event: 'visit.session-closed', personId: ctx.actor.personId, subjectKind: 'session', subjectId: session.id, siteId: session.siteId })
    return row ?? session
  })
  await notifyLive(ctx.db, 'visit', closed.siteId, [closed.id])
  return closed
}

/** Closes one place, which lowers the capacity by one. */
export async function closePlace(ctx: ServiceContext, input: { placeId: string }) {
  const [found] = await ctx.db.select({ sessionId: sessionPlaces.sessionId }).from(sessionPlaces).where(eq(sessionPlaces.id, input.placeId))
  if (!found) throw new DomainError('visit.place-not-found', 'There is no such place in a clinic.')
  const closed = await ctx.db.transaction(async (tx) => {
    const { session } = await lockSession(tx, ctx, { sessionId: found.sessionId })
    await refuseWhileBooked(tx, await tx.select({ id: sessionPlaces.id }).from(sessionPlaces).where(eq(sessionPlaces.id, input.placeId)).for('update'))
    const [row] = await tx.update(sessionPlaces).set({ closedAt: ctx.now }).where(and(eq(sessionPlaces.id, input.placeId), isNull(sessionPlaces.closedAt))).returning()
    if (!row) throw new DomainError('visit.already-closed', 'This place is already closed.')
    await tx.update(clinicSessions).set(nextVersion).where(eq(clinicSessions.id, session.id))
    await appendAudit(tx, { at: ctx.now, event: 'visit.place-closed', personId: ctx.actor.personId, subjectKind: 'place', subjectId: row.id, siteId: session.siteId })
    return { id: row.id, siteId: session.siteId }
  })
  await notifyLive(ctx.db, 'visit', closed.siteId, [closed.id])
  return closed
}

async function refuseWhileBooked(tx: Transaction, places: { id: string }[]): Promise<void> {
  if (!places.length) return
  const waiting = await tx.select({ visitId: visits.id, name: patients.name, startsAt: visits.startsAt }).from(visits).innerJoin(patients, eq(patients.id, visits.patientId))
    .where(and(inArray(visits.placeId, places.map(each => each.id)), inArray(visits.state, ['booked', 'arrived', 'with-optometrist', 'missing']))).orderBy(asc(visits.startsAt))
  if (waiting.length) throw new DomainError('visit.still-booked', `${waiting.length === 1 ? 'One patient is' : `${waiting.length} patients are`} still booked here: move or cancel ${waiting.length === 1 ? 'that visit' : 'those visits'} first.`, { detail: { waiting: waiting.map(each => ({ ...each, startsAt: each.startsAt.toISOString() })) } })
}
