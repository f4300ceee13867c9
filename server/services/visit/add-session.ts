import { and, eq, gt, isNull, lt, ne, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { clinicSessions, sessionPlaces } from '#server/db/schema/index'
import { mayRunSessions } from '#server/policies/visit'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import type { AddSessionBody } from '#shared/contracts/visit'
import { DomainError } from '#shared/domain/errors'

const minuteMs = 60_000

/** Makes a clinic session with its places, one after the other. A room holds one session at a time. */
export async function addSession(ctx: ServiceContext, input: AddSessionBody) {
  if (!mayRunSessions(ctx.actor, input.siteId)) throw new DomainError('visit.not-allowed', 'A coordinator of this site makes clinic sessions.')
  const startsAt = new Date(input.startsAt)
  const endsAt = new Date(startsAt.getTime() + input.places * input.minutes * minuteMs)
  if (endsAt <= ctx.now) throw new DomainError('visit.invalid', 'That time has passed.', { fields: [{ field: 'startsAt', code: 'past', message: 'That time has passed. Choose a later one.' }] })
  const session = await ctx.db.transaction(async (tx) => {
    await claimRoom(tx, { siteId: input.siteId, room: input.room, startsAt, endsAt })
    const [made] = await tx.insert(clinicSessions).values({ siteId: input.siteId, kind: input.kind, room: input.room, startsAt, endsAt }).returning()
    if (!made) throw new DomainError('visit.conflict', 'The session could not be made.')
    await tx.insert(sessionPlaces).values(Array.from({ length: input.places }, (_, place) => ({ sessionId: made.id, startsAt: new Date(startsAt.getTime() + place * input.minutes * minuteMs), minutes: input.minutes })))
    await appendAudit(tx, { at: ctx.now, event: 'visit.session-added', personId: ctx.actor.personId, subjectKind: 'session', subjectId: made.id, siteId: made.siteId, payload: { places: input.places } })
    return made
  })
  await notifyLive(ctx.db, 'visit', session.siteId, [session.id])
  return session
}

/** Refuses a room that another open session holds then. Sessions of one site are made one after the other, so that two cannot take one room at once. */
export async function claimRoom(tx: Transaction, wanted: { siteId: string, room: string, startsAt: Date, endsAt: Date, sessionId?: string }): Promise<void> {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`clinic:${wanted.siteId}`}, 0))`)
  const [clash] = await tx.select({ id: clinicSessions.id }).from(clinicSessions)
    .where(and(eq(clinicSessions.siteId, wanted.siteId), eq(clinicSessions.room, wanted.room), isNull(clinicSessions.closedAt), lt(clinicSessions.startsAt, wanted.endsAt), gt(clinicSessions.endsAt, wanted.startsAt), wanted.sessionId ? ne(clinicSessions.id, wanted.sessionId) : undefined)).limit(1)
  if (clash) throw new DomainError('visit.room-taken', 'This room has another session at that time.', { fields: [{ field: 'room', code: 'taken', message: `${wanted.room} has another session at that time.` }] })
}
