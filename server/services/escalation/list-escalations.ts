import { and, asc, desc, eq, gt, inArray, lt, lte, min, ne, or } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import { escalationActions, escalations, messages, pathways, patients, people, reviews, shifts, sites } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'

const told = alias(people, 'told')
const acknowledger = alias(people, 'acknowledger')
const raiser = alias(people, 'raiser')
const closer = alias(people, 'closer')

export interface ListInput { show: 'open' | 'closed', before?: string, beforeId?: string, limit: number }

/** Open ones by time left, or closed ones newest first by keyset, with what was done, who stands on the ladder, and the clocks. Two rounds whatever the number. */
export async function listEscalations(ctx: ServiceContext, input: ListInput) {
  const rows = await ctx.db.select({
    escalation: escalations, eye: pathways.eye, operatedAt: pathways.operatedAt, surgeonId: pathways.surgeonId, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, phone: patients.phone, recordNumber: patients.recordNumber },
    site: { id: sites.id, name: sites.name, zone: sites.zone }, toldName: told.name, acknowledgerName: acknowledger.name, raiserName: raiser.name, closerName: closer.name,
  })
    .from(escalations)
    .innerJoin(pathways, eq(pathways.id, escalations.pathwayId))
    .innerJoin(patients, eq(patients.id, escalations.patientId))
    .innerJoin(sites, eq(sites.id, escalations.siteId))
    .leftJoin(told, eq(told.id, escalations.surgeonId))
    .leftJoin(acknowledger, eq(acknowledger.id, escalations.acknowledgedBy))
    .leftJoin(raiser, eq(raiser.id, escalations.raisedBy))
    .leftJoin(closer, eq(closer.id, escalations.closedBy))
    .where(and(pathwaysInScope(ctx.actor), input.show === 'open' ? ne(escalations.state, 'closed') : eq(escalations.state, 'closed'), pageAfter(input)))
    .orderBy(...(input.show === 'open' ? [desc(escalations.state), asc(escalations.answerBy), asc(escalations.id)] : [desc(escalations.raisedAt), desc(escalations.id)]))
    .limit(input.limit)
  const around = await loadAround(ctx, rows.map(row => row.escalation))
  return rows.map(({ escalation, ...row }) => ({
    ...row, escalation,
    actions: around.actions.filter(action => action.escalationId === escalation.id),
    rota: around.rota.filter(shift => shift.siteId === escalation.siteId),
    alertedAt: around.alerts.find(alert => alert.escalationId === escalation.id)?.sentAt ?? null,
    reviewVisitId: around.visits.find(visit => visit.pathwayId === escalation.pathwayId)?.visitId ?? null,
  }))
}

/** What comes after the last row of the page before: by time, and by id where two have one time. */
function pageAfter({ before, beforeId }: ListInput) {
  if (!before) return undefined
  const at = new Date(before)
  return beforeId ? or(lt(escalations.raisedAt, at), and(eq(escalations.raisedAt, at), lt(escalations.id, beforeId))) : lt(escalations.raisedAt, at)
}

async function loadAround(ctx: ServiceContext, rows: (typeof escalations.$inferSelect)[]) {
  if (!rows.length) return { actions: [], rota: [], alerts: [], visits: [] }
  const ids = rows.map(row => row.id)
  const [actions, rota, alerts, visits] = await Promise.all([
    ctx.db.select({ escalationId: escalationActions.escalationId, at: escalationActions.at, kind: escalationActions.kind, words: escalationActions.words, personName: people.name })
      .from(escalationActions).leftJoin(people, eq(people.id, escalationActions.personId)).where(inArray(escalationActions.escalationId, ids)).orderBy(asc(escalationActions.at)),
    ctx.db.select({ siteId: shifts.siteId, rung: shifts.rung, name: people.name }).from(shifts).innerJoin(people, eq(people.id, shifts.personId))
      .where(and(inArray(shifts.siteId, [...new Set(rows.map(row => row.siteId))]), lte(shifts.startsAt, ctx.now), gt(shifts.endsAt, ctx.now))).orderBy(asc(shifts.rung)),
    ctx.db.select({ escalationId: messages.escalationId, sentAt: min(messages.sentAt) }).from(messages).where(inArray(messages.escalationId, ids)).groupBy(messages.escalationId),
    ctx.db.selectDistinctOn([reviews.pathwayId], { pathwayId: reviews.pathwayId, visitId: reviews.visitId }).from(reviews).where(inArray(reviews.pathwayId, rows.map(row => row.pathwayId))).orderBy(reviews.pathwayId, desc(reviews.signedAt)),
  ])
  return { actions, rota, alerts, visits }
}
