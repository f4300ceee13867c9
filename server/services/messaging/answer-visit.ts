import { and, eq, sql } from 'drizzle-orm'
import { inboundTexts, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { requireLink } from '#server/services/messaging/load-link'
import { DomainError } from '#shared/domain/errors'

interface Input { token: string, linkId: string | undefined, visitId: string, answer: 'coming' | 'cannot-come' }

/** The patient says on their page whether they come. "Cannot come" gives no place back: a nurse finds another time with them. */
export async function answerVisit(ctx: SystemContext, input: Input): Promise<void> {
  const siteId = await ctx.db.transaction(async (tx) => {
    const { patient, site, visit } = await requireLink(tx, { ...input, now: ctx.now })
    if (!visit || visit.id !== input.visitId) throw new DomainError('messaging.not-found', 'This visit has changed. Look at the page again.')
    const coming = input.answer === 'coming'
    const [changed] = await tx.update(visits).set({ confirmedAt: coming ? ctx.now : null, cannotComeAt: coming ? null : ctx.now, rowVersion: sql`${visits.rowVersion} + 1` })
      .where(and(eq(visits.id, visit.id), sql`${visits.state} in ('booked', 'missing')`)).returning()
    if (!changed) throw new DomainError('messaging.closed', 'This visit can no longer be answered here. Ring us.')
    if (!coming) await tx.insert(inboundTexts).values({ providerId: `page:${visit.id}:${changed.rowVersion}`, fromNumber: 'page', patientId: patient.id, visitId: visit.id, siteId: site.id, body: 'On their page: I need another time.', meaning: 'cannot-come', receivedAt: ctx.now })
    await appendAudit(tx, { at: ctx.now, event: 'messaging.answered-by-patient', personId: null, subjectKind: 'visit', subjectId: visit.id, siteId: site.id, payload: { answer: input.answer } })
    return site.id
  })
  await Promise.all([notifyLive(ctx.db, 'visit', siteId, [input.visitId]), notifyLive(ctx.db, 'message', siteId, [])])
}
