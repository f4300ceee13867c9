import { and, eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { escalationActions, escalations, pathwayEvents, pathways } from '#server/db/schema/index'
import { mayAnswer } from '#server/policies/escalation'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { withdrawMessages } from '#server/services/messaging/queue-messages'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import type { AuditEvent } from '#shared/domain/audit/events'
import { DomainError } from '#shared/domain/errors'
import type { EscalationState } from '#shared/domain/escalation/vocabulary'

export type Answer = 'acknowledge' | 'take-over' | 'record' | 'close'
type Row = typeof escalations.$inferSelect

interface AnswerRule { from: EscalationState[], kind: 'acknowledged' | 'taken-over' | 'recorded' | 'closed', event: AuditEvent, refusal: string, code: string }

/** What each answer needs and leaves behind. Closing needs an acknowledgement first: somebody has it before it ends. */
const rules: Record<Answer, AnswerRule> = {
  'acknowledge': { from: ['open'], kind: 'acknowledged', event: 'escalation.acknowledged', refusal: 'Somebody has already acknowledged this.', code: 'escalation.already-acknowledged' },
  'take-over': { from: ['acknowledged'], kind: 'taken-over', event: 'escalation.taken-over', refusal: 'Nobody has this yet: acknowledge it.', code: 'escalation.conflict' },
  'record': { from: ['open', 'acknowledged'], kind: 'recorded', event: 'escalation.recorded', refusal: 'This escalation is closed.', code: 'escalation.already-closed' },
  'close': { from: ['acknowledged'], kind: 'closed', event: 'escalation.closed', refusal: 'Acknowledge it first, then close it with what was done.', code: 'escalation.conflict' },
}

function changeFor(answer: Answer, ctx: ServiceContext, words: string): Partial<typeof escalations.$inferInsert> {
  if (answer === 'acknowledge') return { state: 'acknowledged', acknowledgedBy: ctx.actor.personId, acknowledgedAt: ctx.now, plan: words, nextRungAt: null }
  if (answer === 'take-over') return { acknowledgedBy: ctx.actor.personId }
  if (answer === 'close') return { state: 'closed', closedBy: ctx.actor.personId, closedAt: ctx.now, closingWords: words, nextRungAt: null }
  return {}
}

/** Acknowledges, takes over, records an action on, or closes an escalation. Whoever comes second sees what the first did. */
export async function answerEscalation(ctx: ServiceContext, input: { id: string, answer: Answer, words: string, rowVersion: number }): Promise<Row> {
  const answered = await ctx.db.transaction(async (tx) => {
    const current = await loadEscalation(tx, ctx, input.id)
    if (!mayAnswer(ctx.actor, current)) throw new DomainError('escalation.not-allowed', 'A surgeon of this site answers escalations.')
    const rule = rules[input.answer]
    const detail = { current: { state: current.state, rowVersion: current.rowVersion, plan: current.plan } }
    if (!rule.from.includes(current.state)) throw new DomainError(rule.code, rule.refusal, { detail })
    if (current.rowVersion !== input.rowVersion) throw new DomainError('escalation.stale', 'This escalation changed meanwhile. Look at it again.', { detail })
    const [row] = await tx.update(escalations).set({ ...changeFor(input.answer, ctx, input.words), rowVersion: sql`${escalations.rowVersion} + 1` })
      .where(and(eq(escalations.id, input.id), eq(escalations.rowVersion, input.rowVersion))).returning()
    if (!row) throw new DomainError('escalation.stale', 'This escalation changed meanwhile. Look at it again.')
    await tx.insert(escalationActions).values({ escalationId: row.id, at: ctx.now, kind: rule.kind, personId: ctx.actor.personId, words: input.words })
    await tx.insert(pathwayEvents).values({ pathwayId: row.pathwayId, at: ctx.now, kind: `escalation-${rule.kind}`, personId: ctx.actor.personId, words: input.words, detail: { escalationId: row.id } })
    await appendAudit(tx, { at: ctx.now, event: rule.event, personId: ctx.actor.personId, subjectKind: 'escalation', subjectId: row.id, siteId: row.siteId })
    if (input.answer === 'acknowledge' || input.answer === 'close') await withdrawMessages(tx, { escalationId: row.id, why: 'acknowledged', now: ctx.now })
    return row
  })
  await notifyLive(ctx.db, 'escalation', answered.siteId, [answered.id])
  return answered
}

/** The person who was told cannot take it: the next rung is due at once. It stays open, and nobody has it. */
export async function handOnEscalation(ctx: ServiceContext, input: { id: string }): Promise<Row> {
  const handed = await ctx.db.transaction(async (tx) => {
    const current = await loadEscalation(tx, ctx, input.id)
    if (!mayAnswer(ctx.actor, current)) throw new DomainError('escalation.not-allowed', 'A surgeon of this site answers escalations.')
    if (current.state !== 'open') throw new DomainError('escalation.already-acknowledged', 'Somebody has already acknowledged this.')
    const [row] = await tx.update(escalations).set({ nextRungAt: ctx.now, rowVersion: sql`${escalations.rowVersion} + 1` }).where(eq(escalations.id, input.id)).returning()
    if (!row) throw new DomainError('escalation.stale', 'This escalation changed meanwhile. Look at it again.')
    await tx.insert(escalationActions).values({ escalationId: row.id, at: ctx.now, kind: 'recorded', personId: ctx.actor.personId, words: 'Handed on: the next rung is told now.' })
    await appendAudit(tx, { at: ctx.now, event: 'escalation.recorded', personId: ctx.actor.personId, subjectKind: 'escalation', subjectId: row.id, siteId: row.siteId, payload: { handedOn: true } })
    return row
  })
  await notifyLive(ctx.db, 'escalation', handed.siteId, [handed.id])
  return handed
}

async function loadEscalation(tx: Transaction, ctx: ServiceContext, id: string): Promise<Row> {
  const [row] = await tx.select({ escalation: escalations }).from(escalations).innerJoin(pathways, eq(pathways.id, escalations.pathwayId))
    .where(and(eq(escalations.id, id), pathwaysInScope(ctx.actor))).for('update', { of: escalations })
  if (!row) throw new DomainError('escalation.not-found', 'There is no such escalation.')
  return row.escalation
}
