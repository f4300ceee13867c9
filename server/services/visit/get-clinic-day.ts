import { and, asc, desc, eq, gte, inArray, lt, ne, sql } from 'drizzle-orm'
import { clinicSessions, escalations, inboundTexts, missingSteps, pathways, patients, people, reviews, sessionPlaces, sites, visits } from '#server/db/schema/index'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { ServiceContext } from '#server/services/context'
import { resolveSite } from '#server/services/visit/resolve-site'
import { dayBounds } from '#shared/domain/visit/site-day'

/** One site's clinic of one day: its visits with what to know, its free places, and texts since last night. One round of queries. */
export async function getClinicDay(ctx: ServiceContext, input: { siteId?: string, date?: string }) {
  const site = await resolveSite(ctx, input.siteId)
  const { from, to, date } = dayBounds(site.zone, ctx.now, input.date)
  const open = ['booked', 'arrived', 'with-optometrist', 'done', 'missing'] as const

  const rows = ctx.db.select({ visit: visits, pathway: { id: pathways.id, eye: pathways.eye, stage: pathways.stage, operatedAt: pathways.operatedAt, dayOneNeed: pathways.dayOneNeed }, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, recordNumber: patients.recordNumber, phone: patients.phone, alerts: patients.alerts, needsTransport: patients.needsTransport, interpreterLanguage: patients.interpreterLanguage, carer: patients.carer }, optometrist: people.name })
    .from(visits)
    .innerJoin(pathways, eq(pathways.id, visits.pathwayId))
    .innerJoin(patients, eq(patients.id, visits.patientId))
    .leftJoin(people, eq(people.id, visits.optometristId))
    .where(and(eq(visits.siteId, site.id), gte(visits.startsAt, from), lt(visits.startsAt, to), inArray(visits.state, open), pathwaysInScope(ctx.actor)))
    .orderBy(asc(visits.startsAt), asc(visits.id))

  const signed = ctx.db.select({ visitId: reviews.visitId, signedAt: reviews.signedAt, signedBy: people.name, reasons: reviews.reasons })
    .from(reviews).innerJoin(visits, eq(visits.id, reviews.visitId)).innerJoin(people, eq(people.id, reviews.signedBy))
    .where(and(eq(visits.siteId, site.id), gte(visits.startsAt, from), lt(visits.startsAt, to))).orderBy(desc(reviews.version))

  const raised = ctx.db.select({ id: escalations.id, pathwayId: escalations.pathwayId, urgency: escalations.urgency, state: escalations.state, reasons: escalations.reasons })
    .from(escalations).where(and(eq(escalations.siteId, site.id), ne(escalations.state, 'closed')))

  const places = ctx.db.select({ id: sessionPlaces.id, startsAt: sessionPlaces.startsAt, minutes: sessionPlaces.minutes, closedAt: sql<Date | null>`coalesce(${sessionPlaces.closedAt}, ${clinicSessions.closedAt})`, kind: clinicSessions.kind, room: clinicSessions.room, sessionId: clinicSessions.id, visitId: visits.id })
    .from(sessionPlaces).innerJoin(clinicSessions, eq(clinicSessions.id, sessionPlaces.sessionId))
    .leftJoin(visits, and(eq(visits.placeId, sessionPlaces.id), inArray(visits.state, open)))
    .where(and(eq(clinicSessions.siteId, site.id), gte(sessionPlaces.startsAt, from), lt(sessionPlaces.startsAt, to))).orderBy(asc(sessionPlaces.startsAt))

  const steps = ctx.db.select({ visitId: missingSteps.visitId, step: missingSteps.step, outcome: missingSteps.outcome, at: missingSteps.at })
    .from(missingSteps).innerJoin(visits, eq(visits.id, missingSteps.visitId))
    .where(and(eq(visits.siteId, site.id), gte(visits.startsAt, from), lt(visits.startsAt, to))).orderBy(asc(missingSteps.at))

  const texts = ctx.db.select({ id: inboundTexts.id, body: inboundTexts.body, meaning: inboundTexts.meaning, receivedAt: inboundTexts.receivedAt, handledAt: inboundTexts.handledAt, patientId: inboundTexts.patientId, patientName: patients.name })
    .from(inboundTexts).innerJoin(patients, eq(patients.id, inboundTexts.patientId))
    .where(and(eq(inboundTexts.siteId, site.id), gte(inboundTexts.receivedAt, new Date(from.getTime() - 14 * 3_600_000)))).orderBy(desc(inboundTexts.receivedAt)).limit(12)

  const sessions = ctx.db.select().from(clinicSessions).where(and(eq(clinicSessions.siteId, site.id), gte(clinicSessions.startsAt, from), lt(clinicSessions.startsAt, to))).orderBy(asc(clinicSessions.startsAt), asc(clinicSessions.room))

  const allSites = ctx.db.select({ id: sites.id, name: sites.name }).from(sites)
  const [visitRows, signedRows, raisedRows, placeRows, stepRows, textRows, siteRows, sessionRows] = await Promise.all([rows, signed, raised, places, steps, texts, allSites, sessions])
  return { site, date, visits: visitRows, signed: signedRows, escalations: raisedRows, places: placeRows, steps: stepRows, texts: textRows, sites: siteRows, sessions: sessionRows }
}
