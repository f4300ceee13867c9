import { and, asc, eq, gt, gte, inArray, isNull, lt, sql } from 'drizzle-orm'
import { clinicSessions, sessionPlaces, sites } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'
import type { SessionKind } from '#shared/domain/visit/vocabulary'

/** Free places ahead of now, of the caller's sites, soonest first. */
export async function listOpenPlaces(ctx: ServiceContext, input: { siteId?: string, kind: SessionKind, from?: string, days: number }) {
  const { siteIds } = pathwayScope(ctx.actor)
  const wanted = input.siteId ? siteIds.filter(each => each === input.siteId) : siteIds
  if (!wanted.length) return []
  const from = input.from ? new Date(`${input.from}T00:00:00Z`) : ctx.now
  const until = new Date(from.getTime() + input.days * 86_400_000)
  return ctx.db.select({ id: sessionPlaces.id, startsAt: sessionPlaces.startsAt, minutes: sessionPlaces.minutes, sessionId: clinicSessions.id, room: clinicSessions.room, siteId: clinicSessions.siteId, siteName: sites.name, isHospital: sites.isHospital, zone: sites.zone })
    .from(sessionPlaces).innerJoin(clinicSessions, eq(clinicSessions.id, sessionPlaces.sessionId)).innerJoin(sites, eq(sites.id, clinicSessions.siteId))
    .where(and(inArray(clinicSessions.siteId, wanted), eq(clinicSessions.kind, input.kind), isNull(clinicSessions.closedAt), isNull(sessionPlaces.closedAt),
      gt(sessionPlaces.startsAt, ctx.now), gte(sessionPlaces.startsAt, from), lt(sessionPlaces.startsAt, until),
      sql`not exists (select 1 from visits v where v.place_id = ${sessionPlaces.id} and v.state not in ('cancelled', 'moved'))`))
    .orderBy(asc(sessionPlaces.startsAt), asc(sessionPlaces.id)).limit(400)
}
