import { and, asc, eq, gte, inArray, lt, or, sql } from 'drizzle-orm'
import { messages, patients, sites } from '#server/db/schema/index'
import { replySites } from '#server/policies/messaging'
import type { ServiceContext } from '#server/services/context'
import { dayBounds } from '#shared/domain/visit/site-day'

export interface GoingOutCursor { dueAt: Date, id: string }

/** What leaves for patients on the site's own day, what has left and what was held back, in order of time. Keyset-paged. */
export async function listGoingOut(ctx: ServiceContext, input: { limit: number, after?: GoingOutCursor }) {
  const siteIds = replySites(ctx.actor)
  if (!siteIds.length) return { rows: [], more: false, counts: [] }
  const [site] = await ctx.db.select({ zone: sites.zone }).from(sites).where(inArray(sites.id, siteIds)).limit(1)
  const { from, to } = dayBounds(site?.zone ?? 'UTC', ctx.now)
  const today = and(inArray(messages.siteId, siteIds), gte(messages.dueAt, from), lt(messages.dueAt, to), sql`${messages.recipientKey} = 'patient:' || ${messages.patientId}`)
  const after = input.after
  const [rows, counts] = await Promise.all([
    ctx.db.select({ message: messages, patient: patients }).from(messages).innerJoin(patients, eq(patients.id, messages.patientId))
      .where(and(today, after ? or(sql`${messages.dueAt} > ${after.dueAt.toISOString()}::timestamptz`, and(eq(messages.dueAt, after.dueAt), sql`${messages.id} > ${after.id}::uuid`)) : undefined))
      .orderBy(asc(messages.dueAt), asc(messages.id)).limit(input.limit + 1),
    ctx.db.select({ state: messages.state, n: sql<number>`count(*)::int` }).from(messages).where(today).groupBy(messages.state),
  ])
  return { rows: rows.slice(0, input.limit), more: rows.length > input.limit, counts }
}
