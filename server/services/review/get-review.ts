import { asc, eq } from 'drizzle-orm'
import { people, reviewDrafts, reviews } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { firstToTell, personOnRung } from '#server/services/escalation/find-surgeon'
import { loadReviewContext } from '#server/services/review/load-context'
import { loadVisit } from '#server/services/visit/load-visit'

/** The sheet of one visit: who, which eye, what is known, the draft, the signed versions and who would be told. */
export async function getReview(ctx: ServiceContext, visitId: string) {
  const loaded = await loadVisit(ctx.db, ctx.actor, visitId)
  const [known, [draft], signed, first, second, third] = await Promise.all([
    loadReviewContext(ctx.db, loaded, ctx.now),
    ctx.db.select({ draft: reviewDrafts, personName: people.name }).from(reviewDrafts).innerJoin(people, eq(people.id, reviewDrafts.personId)).where(eq(reviewDrafts.visitId, visitId)),
    ctx.db.select({ review: reviews, signedByName: people.name }).from(reviews).innerJoin(people, eq(people.id, reviews.signedBy)).where(eq(reviews.visitId, visitId)).orderBy(asc(reviews.version)),
    firstToTell(ctx.db, loaded.site.id, loaded.pathway.surgeonId, ctx.now),
    personOnRung(ctx.db, loaded.site.id, 2, ctx.now),
    personOnRung(ctx.db, loaded.site.id, 3, ctx.now),
  ])
  return { ...loaded, ...known, draft, signed, rungs: [first, second, third].map(person => person?.name ?? null), now: ctx.now }
}
