import { and, asc, desc, eq, gte, inArray, isNull, lt, ne, sql } from 'drizzle-orm'
import { lensPlans, pathways, patients, people, riskAssessments, theatreCases, theatreLists } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { durationOf, turnoverMinutes } from '#server/services/theatre/predict-minutes'
import { resolveSite } from '#server/services/visit/resolve-site'
import { forecastList } from '#shared/domain/theatre/list-forecast'
import type { ListForecast } from '#shared/domain/theatre/list-forecast'
import { dayBounds } from '#shared/domain/visit/site-day'

/** One site's theatre of one day: its lists in order, what each may run to, and the eyes that wait for a list. */
export async function getTheatreDay(ctx: ServiceContext, input: { siteId?: string, date?: string }) {
  const site = await resolveSite(ctx, input.siteId)
  const { from, to, date } = dayBounds(site.zone, ctx.now, input.date)
  const onDay = and(eq(theatreLists.siteId, site.id), gte(theatreLists.startsAt, from), lt(theatreLists.startsAt, to))
  const [lists, cases, waiting] = await Promise.all([
    ctx.db.select({ list: theatreLists, surgeonName: people.name }).from(theatreLists).innerJoin(people, eq(people.id, theatreLists.surgeonId)).where(onDay).orderBy(asc(theatreLists.startsAt), asc(theatreLists.id)),
    ctx.db.select({ theatreCase: theatreCases, pathway: pathways, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, recordNumber: patients.recordNumber, alerts: patients.alerts } }).from(theatreCases)
      .innerJoin(theatreLists, eq(theatreLists.id, theatreCases.listId)).innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).innerJoin(patients, eq(patients.id, pathways.patientId))
      .where(and(onDay, ne(theatreCases.state, 'cancelled'), pathwaysInScope(ctx.actor))).orderBy(asc(theatreCases.position)),
    ctx.db.select({ id: pathways.id, eye: pathways.eye, stage: pathways.stage, priority: pathways.priority, patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate } }).from(pathways)
      .innerJoin(patients, eq(patients.id, pathways.patientId))
      .where(and(pathwaysInScope(ctx.actor), eq(pathways.siteId, site.id), eq(pathways.state, 'open'), inArray(pathways.stage, ['biometry', 'surgery']), isNull(pathways.operatedAt), sql`not exists (select 1 from theatre_cases c where c.pathway_id = ${pathways.id} and c.state in ('planned', 'in-theatre'))`))
      .orderBy(sql`array_position(array['urgent', 'soon', 'routine'], ${pathways.priority})`, asc(pathways.referredAt), asc(pathways.id)).limit(100),
  ])
  const ids = cases.map(row => row.pathway.id)
  const [risks, plans] = ids.length
    ? await Promise.all([
      ctx.db.selectDistinctOn([riskAssessments.pathwayId]).from(riskAssessments).where(inArray(riskAssessments.pathwayId, ids)).orderBy(riskAssessments.pathwayId, desc(riskAssessments.version)),
      ctx.db.selectDistinctOn([lensPlans.pathwayId]).from(lensPlans).where(inArray(lensPlans.pathwayId, ids)).orderBy(lensPlans.pathwayId, desc(lensPlans.version)),
    ])
    : [[], []]
  return {
    site, date, waiting,
    lists: lists.map(({ list, surgeonName }) => {
      const own = cases.filter(row => row.theatreCase.listId === list.id).map(row => ({ ...row, risk: risks.find(each => each.pathwayId === row.pathway.id), plan: plans.find(each => each.pathwayId === row.pathway.id) }))
      return { list, surgeonName, cases: own, forecast: forecastOf(list, own) }
    }),
  }
}

/** The forecast of what is still to come. A list without waiting cases, or one that is over, has none. */
function forecastOf(list: typeof theatreLists.$inferSelect, cases: { theatreCase: typeof theatreCases.$inferSelect, risk: typeof riskAssessments.$inferSelect | undefined }[]): ListForecast | null {
  const spread = 0.25
  const done = cases.filter(each => each.theatreCase.state === 'done').reduce((sum, each) => sum + each.theatreCase.plannedMinutes + turnoverMinutes, 0)
  const waiting = cases.filter(each => each.theatreCase.state !== 'done').slice(0, 60)
  if (!waiting.length) return null
  const endMinute = Math.round((list.endsAt.getTime() - list.startsAt.getTime()) / 60_000)
  return forecastList({
    cases: waiting.map(({ theatreCase, risk }) => ({ id: theatreCase.id, duration: { logMedian: Math.log(theatreCase.plannedMinutes), logSpread: risk ? durationOf(risk).logSpread : spread } })),
    startMinute: Math.min(done, 1440), turnoverMinutes, endMinute,
  })
}
