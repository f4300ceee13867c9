import { and, asc, desc, eq, gte, inArray, isNull, lte, ne, or, sql } from 'drizzle-orm'
import { escalations, inboundTexts, messageEvents, messages, patients, visits } from '#server/db/schema/index'
import { replySites } from '#server/policies/messaging'
import type { ServiceContext } from '#server/services/context'

/** Replies that wait for a person, the worried first, and messages that reached nobody, at the caller's sites. A number that nobody knows is on every unit's list until one settles it. */
export async function listReplies(ctx: ServiceContext, input: { limit: number }) {
  const siteIds = replySites(ctx.actor)
  if (!siteIds.length) return { replies: [], stuck: [], understood: 0 }
  const dayAgo = new Date(ctx.now.getTime() - 86_400_000)
  const [replies, stuck, [understood]] = await Promise.all([
    ctx.db.select({ reply: inboundTexts, patient: patients, visit: visits, escalation: escalations }).from(inboundTexts)
      .leftJoin(patients, eq(patients.id, inboundTexts.patientId)).leftJoin(visits, eq(visits.id, inboundTexts.visitId))
      .leftJoin(escalations, and(eq(escalations.patientId, inboundTexts.patientId), ne(escalations.state, 'closed'), sql`${inboundTexts.meaning} = 'worried'`))
      .where(and(or(inArray(inboundTexts.siteId, siteIds), isNull(inboundTexts.siteId)), isNull(inboundTexts.handledAt)))
      .orderBy(sql`${inboundTexts.meaning} <> 'worried'`, asc(inboundTexts.receivedAt)).limit(input.limit),
    ctx.db.select({ message: messages, patient: patients }).from(messages).innerJoin(patients, eq(patients.id, messages.patientId))
      .where(and(inArray(messages.siteId, siteIds), inArray(messages.state, ['failed', 'held']), lte(messages.dueAt, new Date(ctx.now.getTime() + 86_400_000)),
        // A failed text that left again by e-mail needs nobody, unless that failed as well.
        sql`not exists (select 1 from ${messageEvents} e where e.message_id = ${messages.id} and e.kind = 'fell-back')`))
      .orderBy(desc(messages.createdAt)).limit(input.limit),
    ctx.db.select({ n: sql<number>`count(*)::int` }).from(inboundTexts).where(and(inArray(inboundTexts.siteId, siteIds), gte(inboundTexts.receivedAt, dayAgo), isNull(inboundTexts.handledBy), sql`${inboundTexts.handledAt} is not null`)),
  ])
  return { replies, stuck, understood: understood?.n ?? 0 }
}
