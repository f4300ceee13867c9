import { and, eq, inArray } from 'drizzle-orm'
import { messageEvents, messages, patients, pathways } from '#server/db/schema/index'
import { mayWrite, replySites } from '#server/policies/messaging'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

/**
 * A person has a message that reached nobody sent once more, to the number or address that stands in the record now. One of which it is
 * not known whether it arrived is looked up first, as always.
 */
export async function sendAgain(ctx: ServiceContext, input: { id: string }): Promise<void> {
  const siteId = await ctx.db.transaction(async (tx) => {
    const [found] = await tx.select({ row: messages, patient: patients, pathwayState: pathways.state }).from(messages).innerJoin(patients, eq(patients.id, messages.patientId)).leftJoin(pathways, eq(pathways.id, messages.pathwayId))
      .where(and(eq(messages.id, input.id), inArray(messages.siteId, replySites(ctx.actor)))).for('update', { of: messages })
    if (!found?.row.siteId) throw new DomainError('messaging.not-found', 'There is no such message.')
    const { row, patient } = found
    if (!mayWrite(ctx.actor, found.row.siteId)) throw new DomainError('messaging.not-allowed', 'You may not send messages at this site.')
    if (row.state !== 'failed') throw new DomainError('messaging.stale', 'This message was settled or sent meanwhile.', { detail: { current: { state: row.state } } })
    if (patient.diedOn || found.pathwayState === 'closed') throw new DomainError('messaging.closed', 'Nothing is sent for this person any more.')
    if (row.expiresAt <= ctx.now) throw new DomainError('messaging.expired', 'It is too late for this message. Ring instead.')
    const toAddress = row.channel === 'text' ? patient.phone : patient.email
    if (!toAddress || patient.messageConsent !== true || (row.channel === 'text' && patient.textsStoppedAt)) throw new DomainError('messaging.no-way', 'This person cannot be reached that way: ring them.')
    await tx.update(messages).set({ state: 'queued', toAddress, dueAt: ctx.now, attempts: 0, leaseUntil: null, lastError: null }).where(eq(messages.id, row.id))
    await tx.insert(messageEvents).values({ messageId: row.id, at: ctx.now, kind: 'queued', detail: { again: true, by: ctx.actor.personId } })
    await appendAudit(tx, { at: ctx.now, event: 'messaging.sent-by-hand', personId: ctx.actor.personId, subjectKind: 'message', subjectId: row.id, siteId: row.siteId, payload: { again: true } })
    return found.row.siteId
  })
  await notifyLive(ctx.db, 'message', siteId, [input.id])
}
