import { and, asc, desc, eq, inArray, lt, ne } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import { escalationActions, escalations, pathways, patients, people, sites } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'

const told = alias(people, 'told')
const acknowledger = alias(people, 'acknowledger')

/** Open ones by time left, or closed ones newest first, with the actions taken. Two queries whatever the number. */
export async function listEscalations(ctx: ServiceContext, input: { show: 'open' | 'closed', before?: string, limit: number }) {
  const rows = await ctx.db.select({ escalation: escalations, eye: pathways.eye, operatedAt: pathways.operatedAt, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, phone: patients.phone, recordNumber: patients.recordNumber }, site: { id: sites.id, name: sites.name, zone: sites.zone }, toldName: told.name, acknowledgerName: acknowledger.name })
    .from(escalations)
    .innerJoin(pathways, eq(pathways.id, escalations.pathwayId))
    .innerJoin(patients, eq(patients.id, escalations.patientId))
    .innerJoin(sites, eq(sites.id, escalations.siteId))
    .leftJoin(told, eq(told.id, escalations.surgeonId))
    .leftJoin(acknowledger, eq(acknowledger.id, escalations.acknowledgedBy))
    .where(and(pathwaysInScope(ctx.actor), input.show === 'open' ? ne(escalations.state, 'closed') : eq(escalations.state, 'closed'), input.before ? lt(escalations.raisedAt, new Date(input.before)) : undefined))
    .orderBy(...(input.show === 'open' ? [desc(escalations.state), asc(escalations.answerBy)] : [desc(escalations.raisedAt)]), asc(escalations.id))
    .limit(input.limit)
  const ids = rows.map(row => row.escalation.id)
  const actions = ids.length
    ? await ctx.db.select({ escalationId: escalationActions.escalationId, at: escalationActions.at, kind: escalationActions.kind, words: escalationActions.words, personName: people.name })
        .from(escalationActions).leftJoin(people, eq(people.id, escalationActions.personId)).where(inArray(escalationActions.escalationId, ids)).orderBy(asc(escalationActions.at))
    : []
  return rows.map(row => ({ ...row, actions: actions.filter(action => action.escalationId === row.escalation.id) }))
}
