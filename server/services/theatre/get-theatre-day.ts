import { and, asc, desc, eq, gte, inArray, isNull, lt, ne, sql } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import type { SQL } from 'drizzle-orm'
import { lensPlans, pathways, patients, people, riskAssessments, roles, sites, theatreCases, theatreListChanges, theatreLists } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { durationOf, loadPastCases, modelOf, plannedMinutesOf } from '#server/services/theatre/predict-minutes'
import { resolveSite } from '#server/services/visit/resolve-site'
import { dayBounds } from '#shared/domain/visit/site-day'

/** One site's theatre of one day: its lists in order, what each may run to, and the eyes that wait for a list. */
export async function getTheatreDay(ctx: ServiceContext, input: { siteId?: string, date?: string }) {
  const site = await resolveSite(ctx, input.siteId)
  const { from, to, date } = dayBounds(site.zone, ctx.now, input.date)
  const onDay = and(eq(theatreLists.siteId, site.id), gte(theatreLists.startsAt, from), lt(theatreLists.startsAt, to))!
  const [lists, waiting, surgeons] = await Promise.all([loadLists(ctx, onDay), loadWaiting(ctx, site.id), ctx.db.selectDistinct({ id: people.id, name: people.name }).from(people).innerJoin(roles, eq(roles.personId, people.id)).where(and(eq(roles.siteId, site.id), inArray(roles.role, ['surgeon', 'clinical-lead']))).orderBy(asc(people.name))])
  return { site, date, lists, waiting, surgeons }
}

/** Lists that meet a condition, with all that their cases bring: one round of queries. */
export async function loadLists(ctx: ServiceContext, condition: SQL) {
  const locker = alias(people, 'locker')
  const listIds = ctx.db.select({ id: theatreLists.id }).from(theatreLists).where(condition)
  const pathwayIds = ctx.db.select({ id: theatreCases.pathwayId }).from(theatreCases).where(inArray(theatreCases.listId, listIds))
  const [lists, cases, risks, plans, past, changes] = await Promise.all([
    ctx.db.select({ list: theatreLists, surgeonName: people.name, lockedByName: locker.name, zone: sites.zone }).from(theatreLists).innerJoin(people, eq(people.id, theatreLists.surgeonId)).innerJoin(sites, eq(sites.id, theatreLists.siteId)).leftJoin(locker, eq(locker.id, theatreLists.lockedBy)).where(condition).orderBy(asc(theatreLists.startsAt), asc(theatreLists.room), asc(theatreLists.id)),
    ctx.db.select({ theatreCase: theatreCases, pathway: pathways, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, recordNumber: patients.recordNumber, alerts: patients.alerts, interpreterLanguage: patients.interpreterLanguage } }).from(theatreCases)
      .innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).innerJoin(patients, eq(patients.id, pathways.patientId))
      .where(and(inArray(theatreCases.listId, listIds), ne(theatreCases.state, 'cancelled'), pathwaysInScope(ctx.actor))).orderBy(asc(theatreCases.position), asc(theatreCases.id)),
    ctx.db.selectDistinctOn([riskAssessments.pathwayId]).from(riskAssessments).where(inArray(riskAssessments.pathwayId, pathwayIds)).orderBy(riskAssessments.pathwayId, desc(riskAssessments.version)),
    ctx.db.selectDistinctOn([lensPlans.pathwayId]).from(lensPlans).where(inArray(lensPlans.pathwayId, pathwayIds)).orderBy(lensPlans.pathwayId, desc(lensPlans.version)),
    loadPastCases(ctx.db, sql`${theatreLists.surgeonId} in (${ctx.db.select({ id: theatreLists.surgeonId }).from(theatreLists).where(condition)})`),
    ctx.db.select({ change: theatreListChanges, by: people.name }).from(theatreListChanges).innerJoin(people, eq(people.id, theatreListChanges.personId)).where(and(inArray(theatreListChanges.listId, listIds), eq(theatreListChanges.afterLock, true))).orderBy(desc(theatreListChanges.at)).limit(100),
  ])
  return lists.map(({ list, surgeonName, lockedByName, zone }) => {
    const model = modelOf(past, list.surgeonId)
    return {
      list, surgeonName, lockedByName, zone, ownCases: past.filter(row => row.surgeonId === list.surgeonId).length,
      changes: changes.filter(({ change }) => change.listId === list.id && list.lockedAt !== null && change.at >= list.lockedAt),
      cases: cases.filter(row => row.theatreCase.listId === list.id).map((row) => {
        const risk = risks.find(each => each.pathwayId === row.pathway.id)
        const predicted = durationOf(risk, model)
        // Minutes that a person set are what that person expects; how far they may be wrong is still learnt.
        const duration = row.theatreCase.minutesByHand ? { logMedian: Math.log(row.theatreCase.plannedMinutes), logSpread: predicted.logSpread } : predicted
        return { ...row, risk, plan: plans.find(each => each.pathwayId === row.pathway.id), duration, predicted }
      }),
    }
  })
}
export type LoadedList = Awaited<ReturnType<typeof loadLists>>[number]

/** Eyes of a site that are on no list, the most urgent and the longest waiting first, with the time that they may take. */
async function loadWaiting(ctx: ServiceContext, siteId: string) {
  const rows = await ctx.db.select({
    id: pathways.id, eye: pathways.eye, stage: pathways.stage, priority: pathways.priority, referredAt: pathways.referredAt, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate },
    result: sql<Record<string, unknown> | null>`(select r.result from risk_assessments r where r.pathway_id = ${pathways.id} order by r.version desc limit 1)`,
  }).from(pathways).innerJoin(patients, eq(patients.id, pathways.patientId))
    .where(and(pathwaysInScope(ctx.actor), eq(pathways.siteId, siteId), eq(pathways.state, 'open'), inArray(pathways.stage, ['biometry', 'surgery']), isNull(pathways.operatedAt), sql`not exists (select 1 from theatre_cases c where c.pathway_id = ${pathways.id} and c.state in ('planned', 'in-theatre'))`))
    .orderBy(sql`array_position(array['urgent', 'soon', 'routine'], ${pathways.priority})`, asc(pathways.referredAt), asc(pathways.id)).limit(100)
  return rows.map(({ result, ...row }) => ({ ...row, riskAssessed: result !== null, minutes: plannedMinutesOf(result ? { result } : null) }))
}
