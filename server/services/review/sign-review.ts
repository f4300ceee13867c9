import { and, desc, eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { pathwayEvents, pathways, reviewDrafts, reviews, visits } from '#server/db/schema/index'
import { mayReview } from '#server/policies/review'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { withdrawMessages } from '#server/services/messaging/queue-messages'
import { loadReviewContext } from '#server/services/review/load-context'
import { loadVisit } from '#server/services/visit/load-visit'
import type { AmendReviewBody, SignReviewBody } from '#shared/contracts/review'
import { DomainError } from '#shared/domain/errors'
import { evaluateReview, missingRequiredFindings, rulesVersion } from '#shared/domain/escalation/evaluate'
import { bestLogMarOf, doubtsOf } from '#shared/domain/review/doubts'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'

type SignInput = SignReviewBody & { visitId: string }
type AmendInput = AmendReviewBody & { visitId: string }

/** Signs the first version. The findings, what they raise, the alert rows, event and audit row commit together or not at all. */
export function signReview(ctx: ServiceContext, input: SignInput) {
  return commitVersion(ctx, input, undefined)
}

/** A signed review is never changed: an amendment is the next version, with its reason, on the version the author saw. */
export function amendReview(ctx: ServiceContext, input: AmendInput) {
  return commitVersion(ctx, input, { reason: input.reason, baseVersion: input.baseVersion })
}

interface Amendment { reason: string, baseVersion: number }

async function commitVersion(ctx: ServiceContext, input: { visitId: string, findings: ReviewFindings, confirmedDoubts: string[] }, amendment: Amendment | undefined) {
  try {
    const done = await ctx.db.transaction(tx => write(ctx, tx, input, amendment))
    await Promise.all([notifyLive(ctx.db, 'visit', done.siteId, [input.visitId]), done.escalation ? notifyLive(ctx.db, 'escalation', done.siteId, [done.escalation.id]) : undefined])
    return done
  }
  catch (error) {
    if (refusedConstraint(error) === 'reviews_version') throw new DomainError('review.already-signed', 'This review was signed meanwhile. Look at it, then amend it if needed.')
    throw error
  }
}

async function write(ctx: ServiceContext, tx: Transaction, input: { visitId: string, findings: ReviewFindings, confirmedDoubts: string[] }, amendment: Amendment | undefined) {
  const loaded = await loadVisit(tx, ctx.actor, input.visitId)
  const { visit, pathway } = loaded
  if (!mayReview(ctx.actor, pathway)) throw new DomainError('review.not-allowed', 'An optometrist or surgeon signs findings.')
  if (pathway.state === 'closed') throw new DomainError('pathway.closed', 'This pathway is closed.')
  if (visit.state === 'cancelled' || visit.state === 'moved') throw new DomainError('review.conflict', 'This visit was cancelled or moved.')
  refuseDoubtful(input.findings, input.confirmedDoubts)
  const missing = missingRequiredFindings(input.findings, visit.kind)
  if (missing.length) throw new DomainError('review.incomplete', 'The sheet is not complete yet.', { fields: missing.map(each => ({ field: each.field, code: 'required', message: each.sentence })) })

  const [last] = await tx.select().from(reviews).where(eq(reviews.visitId, visit.id)).orderBy(desc(reviews.version)).limit(1)
  if (amendment ? !last || last.version !== amendment.baseVersion : last) {
    throw new DomainError(amendment ? 'review.stale' : 'review.already-signed', amendment ? 'Somebody amended this review meanwhile. Look at the newest version.' : 'This review is already signed. Amend it instead.', { detail: { current: last ? { version: last.version, findings: last.findings } : null } })
  }
  const { context } = await loadReviewContext(tx, loaded, ctx.now)
  const outcome = evaluateReview(input.findings, context)
  const version = (last?.version ?? 0) + 1
  const [review] = await tx.insert(reviews).values({
    visitId: visit.id, pathwayId: pathway.id, version, findings: input.findings, reasons: outcome.reasons, unchecked: outcome.unchecked, rulesVersion,
    bestLogMar: bestLogMarOf(input.findings) ?? null, iopMmHg: input.findings.iopMmHg ?? null, oedemaGrade: input.findings.oedemaGrade ?? null, cells: input.findings.cells ?? null,
    signedBy: ctx.actor.personId, signedAt: ctx.now, amendReason: amendment?.reason ?? null,
  }).returning()
  if (!review) throw new DomainError('review.conflict', 'The review could not be signed.')
  await tx.delete(reviewDrafts).where(eq(reviewDrafts.visitId, visit.id))
  await tx.update(visits).set({ state: 'done', doneAt: sql`coalesce(${visits.doneAt}, ${ctx.now.toISOString()}::timestamptz)`, arrivedAt: sql`coalesce(${visits.arrivedAt}, ${ctx.now.toISOString()}::timestamptz)`, rowVersion: sql`${visits.rowVersion} + 1` }).where(eq(visits.id, visit.id))
  if (visit.kind === 'day-one') await tx.update(pathways).set({ dayOneAt: sql`coalesce(${pathways.dayOneAt}, ${ctx.now.toISOString()}::timestamptz)`, rowVersion: sql`${pathways.rowVersion} + 1` }).where(and(eq(pathways.id, pathway.id)))
  await withdrawMessages(tx, { visitId: visit.id, why: 'reviewed', now: ctx.now })
  await tx.insert(pathwayEvents).values({ pathwayId: pathway.id, at: ctx.now, kind: amendment ? 'review-amended' : 'review-signed', personId: ctx.actor.personId, words: amendment ? 'Review amended' : 'Review signed', detail: { visitId: visit.id, version } })
  await appendAudit(tx, { at: ctx.now, event: amendment ? 'review.amended' : 'review.signed', personId: ctx.actor.personId, subjectKind: 'review', subjectId: review.id, siteId: pathway.siteId, payload: { version, rulesVersion, rules: outcome.reasons.map(reason => reason.ruleId) } })
  const escalation = outcome.reasons.length ? await raiseEscalation(tx, { pathwayId: pathway.id, reasons: outcome.reasons, raisedBy: ctx.actor.personId, now: ctx.now }) : undefined
  return { review, urgency: outcome.urgency, escalation, siteId: pathway.siteId, unchecked: outcome.unchecked }
}

function refuseDoubtful(findings: ReviewFindings, confirmed: string[]): void {
  const open = doubtsOf(findings).filter(doubt => !confirmed.includes(doubt.field))
  if (open.length) throw new DomainError('review.doubtful', 'A value is unusual. Check it, then confirm it.', { fields: open })
}
