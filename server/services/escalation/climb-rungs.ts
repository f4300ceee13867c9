import { and, asc, eq, lte, sql } from 'drizzle-orm'
import type { Database } from '#server/db/client'
import { escalationActions, escalations, sites } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { clinicalLeadOf, personOnRung } from '#server/services/escalation/find-surgeon'
import { queueAlert } from '#server/services/messaging/queue-messages'
import { lastRung, nextRungAfter } from '#shared/domain/escalation/ladder'

/** Finds escalations whose next rung is due and climbs each once. Safe to run twice, late, and on two machines. */
export async function climbRungs(ctx: SystemContext): Promise<number> {
  const due = await ctx.db.select({ id: escalations.id }).from(escalations)
    .where(and(eq(escalations.state, 'open'), lte(escalations.nextRungAt, ctx.now))).orderBy(asc(escalations.nextRungAt)).limit(50)
  let climbed = 0
  for (const { id } of due) if (await climbOne(ctx.db, id, ctx.now)) climbed++
  return climbed
}

async function climbOne(db: Database, id: string, now: Date): Promise<boolean> {
  const siteId = await db.transaction(async (tx) => {
    const [row] = await tx.select({ escalation: escalations, zone: sites.zone }).from(escalations).innerJoin(sites, eq(sites.id, escalations.siteId))
      .where(and(eq(escalations.id, id), eq(escalations.state, 'open'), lte(escalations.nextRungAt, now))).for('update', { of: escalations, skipLocked: true })
    if (!row) return undefined
    // After the last rung the ladder goes round again: an unanswered escalation is never let go.
    const rung = row.escalation.rung >= lastRung ? 1 : row.escalation.rung + 1
    const person = await personOnRung(tx, row.escalation.siteId, rung, now) ?? await clinicalLeadOf(tx, row.escalation.siteId)
    const [climbed] = await tx.update(escalations).set({ rung, nextRungAt: nextRungAfter(row.escalation.urgency, now, row.zone), rowVersion: sql`${escalations.rowVersion} + 1` }).where(eq(escalations.id, id)).returning()
    if (!climbed) return undefined
    await tx.insert(escalationActions).values({ escalationId: id, at: now, kind: 'rung', personId: person?.id ?? null, words: person ? `Nobody had acknowledged: ${person.name} is told.` : 'Nobody had acknowledged, and nobody stands on the next rung.' })
    await appendAudit(tx, { at: now, event: 'escalation.rung', personId: null, subjectKind: 'escalation', subjectId: id, siteId: row.escalation.siteId, payload: { rung } })
    if (person) await queueAlert(tx, { escalation: climbed, person, rung, now })
    return row.escalation.siteId
  })
  if (siteId) await notifyLive(db, 'escalation', siteId, [id])
  return siteId !== undefined
}
