import { and, asc, desc, eq, gte, inArray, isNotNull, isNull, ne, or, sql } from 'drizzle-orm'
import type { SQL } from 'drizzle-orm'
import { escalations, pathways, patients, people, referrals, reviews, sites, visits } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { PathwaysQuery } from '#shared/contracts/pathway'
import { lateAfter } from '#shared/domain/pathway/next-step'
import type { StageGroup } from '#shared/domain/pathway/next-step'

export const pageOfPathways = 25

const groups: Readonly<Record<StageGroup, SQL>> = {
  'before-surgery': sql`(${pathways.stage} in ('referral', 'biometry') or (${pathways.stage} = 'surgery' and ${pathways.operatedAt} is null))`,
  'day-one': sql`(${pathways.stage} = 'day-one' or (${pathways.stage} = 'surgery' and ${pathways.operatedAt} is not null))`,
  'follow-up': sql`${pathways.stage} = 'follow-up'`,
  'discharged': sql`${pathways.stage} = 'discharge'`,
}

/** Late by the limits of `lateAfter`, asked in the query so that a page of late eyes is a page of late eyes. */
function isLate(now: Date): SQL<boolean> {
  const at = sql`${now.toISOString()}::timestamptz`
  const past = (from: SQL, hours: number) => sql`${from} + make_interval(hours => ${hours}) < ${at}`
  return sql<boolean>`coalesce(case
    when ${pathways.state} = 'held' then ${pathways.lookAgainOn} < (${at} at time zone ${sites.zone})::date
    when ${pathways.stage} = 'referral' then ${past(sql`${pathways.stageSince}`, lateAfter.referralDays * 24)}
    when ${pathways.stage} = 'biometry' then ${past(sql`${pathways.stageSince}`, lateAfter.biometryDays * 24)}
    when ${pathways.stage} = 'surgery' and ${pathways.operatedAt} is null then ${past(sql`${pathways.surgeryAt}`, lateAfter.surgeryPassedHours)}
    when ${pathways.stage} in ('surgery', 'day-one') then ${pathways.dayOneAt} is null and ${past(sql`${pathways.operatedAt}`, lateAfter.dayOneHours)}
    when ${pathways.stage} = 'follow-up' then ${pathways.followUpAt} is null and ${past(sql`${pathways.operatedAt}`, lateAfter.followUpDays * 24)}
      and not exists (select 1 from visits v where v.pathway_id = ${pathways.id} and v.state = 'booked' and v.starts_at >= ${at})
    else false end, false)`
}

/** Where the page before ended: beyond its last row, earliest surgery first and eyes without a date last. */
function beyond(after: string | undefined): SQL | undefined {
  const [at, id] = after?.split('_') ?? []
  if (!id) return undefined
  if (at === 'none') return and(isNull(pathways.surgeryAt), sql`${pathways.id} > ${id}::uuid`)
  return or(sql`(${pathways.surgeryAt}, ${pathways.id}) > (${at}::timestamptz, ${id}::uuid)`, isNull(pathways.surgeryAt))
}

/** The horizon: open pathways with the facts of their next step, a keyset page at a time, and what the whole filter holds. */
export async function listPathways(ctx: ServiceContext, input: PathwaysQuery) {
  const late = isLate(ctx.now)
  const filter = and(
    pathwaysInScope(ctx.actor), ne(pathways.state, 'closed'),
    input.group ? groups[input.group] : input.stage ? eq(pathways.stage, input.stage) : ne(pathways.stage, 'discharge'),
    input.surgeonId ? eq(pathways.surgeonId, input.surgeonId) : undefined,
    input.siteId ? eq(pathways.siteId, input.siteId) : undefined,
    input.show === 'late' ? late : input.show === 'escalated' ? isNotNull(escalations.id) : undefined,
  )
  const openEscalation = and(eq(escalations.pathwayId, pathways.id), ne(escalations.state, 'closed'))
  const [rows, [counts]] = await Promise.all([
    ctx.db.select({
      pathway: pathways, isLate: late, zone: sites.zone, siteName: sites.name, surgeonName: people.name, triageDecision: referrals.triageDecision,
      patient: { id: patients.id, name: patients.name, birthDate: patients.birthDate, phone: patients.phone },
      escalation: { id: escalations.id, urgency: escalations.urgency, state: escalations.state, raisedAt: escalations.raisedAt, answerBy: escalations.answerBy, reasons: escalations.reasons },
    }).from(pathways)
      .innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId))
      .leftJoin(people, eq(people.id, pathways.surgeonId)).leftJoin(referrals, eq(referrals.pathwayId, pathways.id)).leftJoin(escalations, openEscalation)
      .where(and(filter, beyond(input.after)))
      .orderBy(sql`${pathways.surgeryAt} asc nulls last`, asc(pathways.id)).limit(pageOfPathways),
    ctx.db.select({ all: sql<number>`count(*)::int`, late: sql<number>`count(*) filter (where ${late})::int`, escalated: sql<number>`count(${escalations.id})::int` })
      .from(pathways).innerJoin(sites, eq(sites.id, pathways.siteId)).leftJoin(escalations, openEscalation).where(filter),
  ])
  const ids = rows.map(row => row.pathway.id)
  const [nextVisits, latest] = ids.length
    ? await Promise.all([
      ctx.db.selectDistinctOn([visits.pathwayId], { pathwayId: visits.pathwayId, kind: visits.kind, startsAt: visits.startsAt }).from(visits)
        .where(and(inArray(visits.pathwayId, ids), inArray(visits.state, ['booked', 'arrived', 'with-optometrist', 'missing']), gte(visits.startsAt, new Date(ctx.now.getTime() - 86_400_000)))).orderBy(visits.pathwayId, asc(visits.startsAt)),
      ctx.db.selectDistinctOn([reviews.pathwayId], { pathwayId: reviews.pathwayId, findings: reviews.findings, signedAt: reviews.signedAt }).from(reviews)
        .where(inArray(reviews.pathwayId, ids)).orderBy(reviews.pathwayId, desc(reviews.signedAt), desc(reviews.version)),
    ])
    : [[], []]
  return {
    counts: counts ?? { all: 0, late: 0, escalated: 0 },
    rows: rows.map(row => ({ ...row, nextVisit: nextVisits.find(visit => visit.pathwayId === row.pathway.id), latest: latest.find(review => review.pathwayId === row.pathway.id) })),
  }
}
