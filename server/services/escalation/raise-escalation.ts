import { and, eq, ne, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { escalationActions, escalations, pathwayEvents, pathways, sites } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { clinicalLeadOf, firstToTell } from '#server/services/escalation/find-surgeon'
import { queueAlert } from '#server/services/messaging/queue-messages'
import { answerBy, nextRungAfter } from '#shared/domain/escalation/ladder'
import { mergeReasons } from '#shared/domain/escalation/merge'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import { DomainError } from '#shared/domain/errors'
import { urgencies } from '#shared/domain/pathway/vocabulary'

export interface RaiseInput { pathwayId: string, reasons: EscalationReason[], raisedBy: string | null, now: Date }

/**
 * Raises an escalation in the caller's transaction, or joins the open one of the pathway: one pathway carries at most one,
 * with all its reasons, and its urgency only rises. The alert rows are written in the same transaction.
 */
export async function raiseEscalation(tx: Transaction, input: RaiseInput): Promise<{ id: string, number: number, siteId: string }> {
  if (!input.reasons.length) throw new DomainError('escalation.invalid', 'An escalation needs a reason.')
  const [row] = await tx.select({ pathway: pathways, site: sites }).from(pathways).innerJoin(sites, eq(sites.id, pathways.siteId)).where(eq(pathways.id, input.pathwayId)).for('update', { of: pathways })
  if (!row) throw new DomainError('pathway.not-found', 'There is no such pathway.')
  const [existing] = await tx.select().from(escalations).where(and(eq(escalations.pathwayId, input.pathwayId), ne(escalations.state, 'closed'))).for('update')
  const merged = mergeReasons(existing?.reasons ?? [], input.reasons)
  const dueAt = answerBy(merged.urgency, input.now, row.site.zone)
  const told = await firstToTell(tx, row.site.id, row.pathway.surgeonId, input.now)
  const rises = !existing || urgencies.indexOf(merged.urgency) < urgencies.indexOf(existing.urgency)
  const sentence = input.reasons.map(reason => reason.sentence).join(' ')

  const [escalation] = existing
    ? await tx.update(escalations).set({
        reasons: merged.reasons, urgency: merged.urgency, rowVersion: sql`${escalations.rowVersion} + 1`,
        answerBy: dueAt < existing.answerBy ? dueAt : existing.answerBy,
        // A worse finding after an acknowledgement asks for an answer again; a repeated one does not.
        ...(rises ? { state: 'open' as const, acknowledgedBy: null, acknowledgedAt: null, rung: 1, nextRungAt: nextRungAfter(merged.urgency, input.now, row.site.zone), surgeonId: told?.id ?? existing.surgeonId } : {}),
      }).where(eq(escalations.id, existing.id)).returning()
    : await tx.insert(escalations).values({
        pathwayId: row.pathway.id, patientId: row.pathway.patientId, siteId: row.site.id, urgency: merged.urgency, reasons: merged.reasons,
        raisedAt: input.now, raisedBy: input.raisedBy, answerBy: dueAt, surgeonId: told?.id ?? null, nextRungAt: nextRungAfter(merged.urgency, input.now, row.site.zone),
      }).returning()
  if (!escalation) throw new DomainError('escalation.conflict', 'The escalation could not be raised.')

  await tx.insert(escalationActions).values({ escalationId: escalation.id, at: input.now, kind: existing ? 'joined' : 'raised', personId: input.raisedBy, words: sentence })
  await tx.insert(pathwayEvents).values({ pathwayId: row.pathway.id, at: input.now, kind: 'escalation-raised', personId: input.raisedBy, words: sentence, detail: { escalationId: escalation.id, urgency: merged.urgency } })
  await appendAudit(tx, { at: input.now, event: existing ? 'escalation.joined' : 'escalation.raised', personId: input.raisedBy, subjectKind: 'escalation', subjectId: escalation.id, siteId: row.site.id, payload: { rules: input.reasons.map(reason => `${reason.ruleId}@${reason.ruleVersion}`), urgency: merged.urgency } })

  if (rises && told) {
    await queueAlert(tx, { escalation, person: told, rung: 1, now: input.now })
    await tx.insert(escalationActions).values({ escalationId: escalation.id, at: input.now, kind: 'alerted', personId: told.id, words: `${told.name} is told by text and e-mail.` })
  }
  if (input.reasons.some(reason => reason.alsoTell === 'clinical-lead')) {
    const lead = await clinicalLeadOf(tx, row.site.id)
    if (lead && lead.id !== told?.id) await queueAlert(tx, { escalation, person: lead, rung: 0, now: input.now })
  }
  return { id: escalation.id, number: escalation.number, siteId: row.site.id }
}
