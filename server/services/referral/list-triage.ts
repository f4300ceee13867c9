import { and, asc, eq, inArray, isNull, ne, or, sql } from 'drizzle-orm'
import type { SQL } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import { attachments, pathways, patients, referrals, sites } from '#server/db/schema/index'
import { pathwayActs } from '#server/policies/pathway'
import { sitesWithRole } from '#server/policies/scope'
import type { ServiceContext } from '#server/services/context'
import type { TriageQuery } from '#shared/contracts/referral'
import { DomainError } from '#shared/domain/errors'
import { redFlagIds } from '#shared/domain/referral/red-flags'
import { referralSettingsOf } from '#shared/domain/referral/site-settings'
import { missingParts, waitClock } from '#shared/domain/referral/waiting'
import type { MissingPart } from '#shared/domain/referral/waiting'

export const pageOfTriage = 25
/** Fewer operated eyes than this say nothing about the next. */
const eyesForMedian = 5
const recentDays = 180

const lacks: Readonly<Record<MissingPart, SQL<boolean>>> = {
  'red-flags': sql<boolean>`not (${referrals.redFlags} ?& array[${sql.raw(redFlagIds.map(each => `'${each}'`).join(', '))}])`,
  'telephone': sql<boolean>`${patients.phone} is null`,
  'message-consent': sql<boolean>`${patients.messageConsent} is null`,
}
const lacksAny = sql<boolean>`(${sql.join(missingParts.map(part => lacks[part]), sql` or `)})`

/** Referrals that wait for a decision, longest wait first, a keyset page at a time; and what the whole queue holds. */
export async function listTriage(ctx: ServiceContext, input: TriageQuery) {
  const mine = sitesWithRole(ctx.actor, ...pathwayActs.seeTriage)
  if (!mine.length) throw new DomainError('referral.not-allowed', 'Surgeons and coordinators see the referrals that wait.')
  const wanted = input.siteId ? mine.filter(each => each === input.siteId) : mine
  const waits = and(
    wanted.length ? inArray(pathways.siteId, wanted) : sql`false`, eq(pathways.stage, 'referral'), ne(pathways.state, 'closed'),
    or(isNull(referrals.triageDecision), eq(referrals.triageDecision, 'returned')),
  )
  const [rows, days, unit] = await Promise.all([page(ctx, waits, input.after), countByDay(ctx, waits), sitesOf(ctx, mine)])
  const paceOf = (siteId: string) => unit.find(site => site.id === siteId) ?? { ...referralSettingsOf({}), id: siteId, measured: 0 }
  const clockOf = (siteId: string, referredAt: Date) => {
    const pace = paceOf(siteId)
    return waitClock({ referredAt, now: ctx.now, targetWeeks: pace.waitTargetWeeks, weeksToSurgery: pace.weeksToSurgery })
  }
  const counts = { all: 0, incomplete: 0, couldPass: 0, passed: 0 }
  for (const day of days) {
    counts.all += day.n
    counts.incomplete += day.incomplete
    const { standing } = clockOf(day.siteId, day.referredAt)
    if (standing === 'could-pass') counts.couldPass += day.n
    if (standing === 'passed') counts.passed += day.n
  }
  return { counts, sites: unit, rows: rows.map(row => ({ ...row, clock: clockOf(row.pathway.siteId, row.pathway.referredAt), targetWeeks: paceOf(row.pathway.siteId).waitTargetWeeks, missing: missingParts.filter(part => row.lacks[part]) })) }
}
export type TriageList = Awaited<ReturnType<typeof listTriage>>

const fellow = alias(pathways, 'fellow')
const fellowReferral = alias(referrals, 'fellow_referral')

function page(ctx: ServiceContext, waits: SQL | undefined, after: string | undefined) {
  const [at, id] = after?.split('_') ?? []
  return ctx.db.select({
    pathway: pathways, referral: referrals, patient: patients, siteName: sites.name, sitePhone: sites.phone, zone: sites.zone,
    /** To the microsecond, as the database has it: a mark of milliseconds would repeat rows. */
    mark: sql<string>`to_char(${pathways.referredAt} at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.US"Z"')`,
    lacks: { 'red-flags': lacks['red-flags'], 'telephone': lacks.telephone, 'message-consent': lacks['message-consent'] },
    fellow: { pathwayId: fellow.id, rowVersion: fellowReferral.rowVersion },
    attachmentCount: sql<number>`(select count(*)::int from ${attachments} where ${attachments.pathwayId} = ${pathways.id})`,
  }).from(pathways)
    .innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId)).innerJoin(referrals, eq(referrals.pathwayId, pathways.id))
    .leftJoin(fellow, and(eq(fellow.patientId, pathways.patientId), ne(fellow.eye, pathways.eye), eq(fellow.siteId, pathways.siteId), eq(fellow.stage, 'referral'), eq(fellow.state, 'open')))
    .leftJoin(fellowReferral, and(eq(fellowReferral.pathwayId, fellow.id), or(isNull(fellowReferral.triageDecision), eq(fellowReferral.triageDecision, 'returned'))))
    .where(and(waits, id ? sql`(${pathways.referredAt}, ${pathways.id}) > (${at}::timestamptz, ${id}::uuid)` : undefined))
    .orderBy(asc(pathways.referredAt), asc(pathways.id)).limit(pageOfTriage)
}

/** The queue by site and day of referral: some hundred rows whatever its length, from which the clock counts. */
function countByDay(ctx: ServiceContext, waits: SQL | undefined) {
  const day = sql<Date>`date_trunc('day', ${pathways.referredAt})`.mapWith(pathways.referredAt)
  return ctx.db.select({ siteId: pathways.siteId, referredAt: day, n: sql<number>`count(*)::int`, incomplete: sql<number>`(count(*) filter (where ${lacksAny}))::int` })
    .from(pathways).innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(referrals, eq(referrals.pathwayId, pathways.id))
    .where(waits).groupBy(pathways.siteId, sql`date_trunc('day', ${pathways.referredAt})`)
}

/** Each site's target, and how long its recent eyes took from acceptance to surgery (median), or what the site has set until it knows. */
async function sitesOf(ctx: ServiceContext, siteIds: string[]) {
  const since = sql`${new Date(ctx.now.getTime() - recentDays * 86_400_000).toISOString()}::timestamptz`
  const rows = await ctx.db.select({
    id: sites.id, name: sites.name, settings: sites.settings,
    measured: sql<number>`count(${referrals.id})::int`,
    medianWeeks: sql<number | null>`percentile_cont(0.5) within group (order by extract(epoch from ${pathways.operatedAt} - ${referrals.triagedAt}) / 604800)::float8`,
  }).from(sites)
    .leftJoin(pathways, and(eq(pathways.siteId, sites.id), sql`${pathways.operatedAt} > ${since}`))
    .leftJoin(referrals, and(eq(referrals.pathwayId, pathways.id), eq(referrals.triageDecision, 'accepted'), sql`${referrals.triagedAt} < ${pathways.operatedAt}`))
    .where(inArray(sites.id, siteIds)).groupBy(sites.id).orderBy(asc(sites.name))
  return rows.map((row) => {
    const settings = referralSettingsOf(row.settings)
    const isMeasured = row.measured >= eyesForMedian && row.medianWeeks !== null
    return { id: row.id, name: row.name, ...settings, weeksToSurgery: isMeasured ? row.medianWeeks ?? settings.weeksToSurgery : settings.weeksToSurgery, measured: isMeasured ? row.measured : 0 }
  })
}
