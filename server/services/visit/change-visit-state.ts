import { and, eq, inArray, sql } from 'drizzle-orm'
import { visits } from '#server/db/schema/index'
import { mayRunClinic, maySendIn } from '#server/policies/visit'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { withdrawMessages } from '#server/services/messaging/queue-messages'
import { loadVisit } from '#server/services/visit/load-visit'
import type { AuditEvent } from '#shared/domain/audit/events'
import { DomainError } from '#shared/domain/errors'
import type { VisitState } from '#shared/domain/visit/vocabulary'

type Step = 'arrived' | 'sent-in' | 'missing'

/** From which states each step may be taken, what it becomes, and what it is called in the audit log. */
const steps: Record<Step, { from: VisitState[], to: VisitState, event: AuditEvent }> = {
  'arrived': { from: ['booked', 'missing'], to: 'arrived', event: 'visit.arrived' },
  'sent-in': { from: ['arrived'], to: 'with-optometrist', event: 'visit.sent-in' },
  'missing': { from: ['booked'], to: 'missing', event: 'visit.missing' },
}

/** Moves a visit along the clinic list: arrived, with the optometrist, missing. */
export async function changeVisitState(ctx: ServiceContext, input: { visitId: string, step: Step, rowVersion: number }) {
  const rule = steps[input.step]
  const changed = await ctx.db.transaction(async (tx) => {
    const loaded = await loadVisit(tx, ctx.actor, input.visitId)
    const may = input.step === 'sent-in' ? maySendIn(ctx.actor, loaded.visit.siteId) : mayRunClinic(ctx.actor, loaded.visit.siteId) || maySendIn(ctx.actor, loaded.visit.siteId)
    if (!may) throw new DomainError('visit.not-allowed', 'You may not run the clinic list at this site.')
    if (input.step === 'missing' && loaded.visit.startsAt > ctx.now) throw new DomainError('visit.not-due', 'This visit is not due yet.')
    const times = { 'arrived': { arrivedAt: ctx.now }, 'sent-in': { sentInAt: ctx.now, optometristId: ctx.actor.roles.some(each => each.role === 'optometrist') ? ctx.actor.personId : null }, 'missing': { missingAt: ctx.now } }[input.step]
    const [visit] = await tx.update(visits).set({ state: rule.to, ...times, rowVersion: sql`${visits.rowVersion} + 1` })
      .where(and(eq(visits.id, input.visitId), eq(visits.rowVersion, input.rowVersion), inArray(visits.state, rule.from))).returning()
    if (!visit) throw new DomainError('visit.stale', 'Somebody changed this visit meanwhile. Look at it again.', { detail: { current: { state: loaded.visit.state, rowVersion: loaded.visit.rowVersion } } })
    if (input.step === 'arrived') await withdrawMessages(tx, { visitId: visit.id, why: 'arrived', now: ctx.now })
    await appendAudit(tx, { at: ctx.now, event: rule.event, personId: ctx.actor.personId, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId })
    return visit
  })
  await notifyLive(ctx.db, 'visit', changed.siteId, [changed.id])
  return changed
}
