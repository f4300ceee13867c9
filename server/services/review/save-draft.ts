import { and, eq, sql } from 'drizzle-orm'
import { reviewDrafts, reviews } from '#server/db/schema/index'
import { mayReview } from '#server/policies/review'
import type { ServiceContext } from '#server/services/context'
import { loadVisit } from '#server/services/visit/load-visit'
import type { SaveDraftBody } from '#shared/contracts/review'
import { DomainError } from '#shared/domain/errors'

/**
 * Keeps what was typed. Two people on one sheet: the second sees the first's version beside their own and neither is lost.
 * `rowVersion` null means "there was no draft when I began".
 */
export async function saveDraft(ctx: ServiceContext, input: SaveDraftBody & { visitId: string }) {
  return ctx.db.transaction(async (tx) => {
    const { pathway } = await loadVisit(tx, ctx.actor, input.visitId)
    if (!mayReview(ctx.actor, pathway)) throw new DomainError('review.not-allowed', 'An optometrist or surgeon records findings.')
    const [signed] = await tx.select({ version: reviews.version }).from(reviews).where(eq(reviews.visitId, input.visitId)).limit(1)
    if (signed) throw new DomainError('review.already-signed', 'This review is signed. Amend it instead.')
    const values = { visitId: input.visitId, personId: ctx.actor.personId, findings: input.findings, savedAt: ctx.now }
    const [saved] = input.rowVersion === null
      ? await tx.insert(reviewDrafts).values(values).onConflictDoNothing().returning()
      : await tx.update(reviewDrafts).set({ ...values, rowVersion: sql`${reviewDrafts.rowVersion} + 1` }).where(and(eq(reviewDrafts.visitId, input.visitId), eq(reviewDrafts.rowVersion, input.rowVersion))).returning()
    if (saved) return saved
    const [current] = await tx.select().from(reviewDrafts).where(eq(reviewDrafts.visitId, input.visitId))
    throw new DomainError('review.stale', 'Somebody else saved this sheet meanwhile. Both versions are shown.', { detail: { current: current ? { findings: current.findings, rowVersion: current.rowVersion, personId: current.personId, savedAt: current.savedAt } : null } })
  })
}
