import { and, asc, desc, eq, gte, inArray, isNotNull } from 'drizzle-orm'
import { pathways, patients, reviews, sites, visits } from '#server/db/schema/index'
import { pathwayScope } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'
import { liveVisitStates } from '#shared/domain/visit/vocabulary'

const dayMs = 86_400_000
const mostShown = 100

/** Eyes shared with the caller's practices that are under way after surgery, each with its visits from yesterday on and its last findings. */
export async function listSharedVisits(ctx: ServiceContext) {
  const { practiceIds } = pathwayScope(ctx.actor)
  if (!practiceIds.length) return { eyes: [], visits: [], last: [] }
  const shared = and(inArray(pathways.practiceId, practiceIds), inArray(pathways.state, ['open', 'held']), inArray(pathways.stage, ['day-one', 'follow-up']), isNotNull(pathways.operatedAt))
  const [eyes, booked, last] = await Promise.all([
    ctx.db.select({ id: pathways.id, eye: pathways.eye, stage: pathways.stage, operatedAt: pathways.operatedAt, practiceId: pathways.practiceId, siteId: pathways.siteId, siteName: sites.name, sitePhone: sites.phone, zone: sites.zone, patient: { id: patients.id, name: patients.name, phone: patients.phone, alerts: patients.alerts } })
      .from(pathways).innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId)).where(shared).orderBy(asc(pathways.operatedAt), asc(pathways.id)).limit(mostShown),
    ctx.db.select({ id: visits.id, pathwayId: visits.pathwayId, kind: visits.kind, state: visits.state, startsAt: visits.startsAt, siteName: sites.name }).from(visits).innerJoin(pathways, eq(pathways.id, visits.pathwayId)).innerJoin(sites, eq(sites.id, visits.siteId))
      .where(and(shared, inArray(visits.state, [...liveVisitStates]), gte(visits.startsAt, new Date(ctx.now.getTime() - dayMs)))).orderBy(asc(visits.startsAt)),
    ctx.db.selectDistinctOn([reviews.pathwayId], { pathwayId: reviews.pathwayId, visitId: reviews.visitId, signedAt: reviews.signedAt }).from(reviews).innerJoin(pathways, eq(pathways.id, reviews.pathwayId)).where(shared).orderBy(reviews.pathwayId, desc(reviews.signedAt)),
  ])
  return { eyes, visits: booked, last }
}
