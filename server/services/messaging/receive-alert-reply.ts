import { and, desc, eq, gte, isNull, ne } from 'drizzle-orm'
import { escalations, inboundTexts, messageEvents, messages, people, roles } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext, SystemContext } from '#server/services/context'
import { answerEscalation, handOnEscalation } from '#server/services/escalation/answer-escalation'
import { origin } from '#server/services/messaging/patient-link'
import type { InboundText } from '#server/services/messaging/receive-text'
import { DomainError } from '#shared/domain/errors'
import { readAlertReply } from '#shared/domain/messaging/reply'
import type { Actor } from '#shared/domain/people/vocabulary'

type Escalation = typeof escalations.$inferSelect
interface Answered { escalation: Escalation | undefined, words: string }

const alertsWithinMs = 48 * 3_600_000
const answerUntilMs = 3_600_000

/**
 * A member of staff answers an alert by text. The number says who it is, and that person's own rights decide. HAVE acknowledges,
 * ON hands on, anything else is kept with the escalation; each is answered, so that nobody believes to have it who has not.
 * Answers false when the number is nobody's to whom an alert was sent lately.
 */
export async function receiveAlertReply(ctx: SystemContext, input: InboundText): Promise<boolean> {
  const who = await unscopedFindPerson(ctx, input.from)
  if (!who) return false
  const waiting = await alertsTo(ctx, who.actor.personId)
  if (!waiting.length) return false
  const [seen] = await ctx.db.select({ id: inboundTexts.id }).from(inboundTexts).where(eq(inboundTexts.providerId, input.providerId))
  if (seen) return true
  const reading = readAlertReply(input.body)
  // Acted on before it is kept: after a crash in between the provider's repeat finds the escalation as it should be.
  const { escalation, words } = await act({ ...ctx, actor: who.actor }, waiting, reading, input.body)
  const siteId = (escalation ?? waiting[0])?.siteId ?? null
  const answerId = await ctx.db.transaction(async (tx) => {
    const [kept] = await tx.insert(inboundTexts).values({ providerId: input.providerId, fromNumber: input.from.slice(0, 40), body: input.body.slice(0, 1600), meaning: reading.meaning, personId: who.actor.personId, siteId, receivedAt: ctx.now, handledAt: ctx.now, handledWords: words.slice(0, 300) }).onConflictDoNothing().returning({ id: inboundTexts.id })
    if (!kept) return undefined
    const [answer] = await tx.insert(messages).values({
      kind: 'alert.answer', recipientKey: `person:${who.actor.personId}`, subjectKey: `inbound:${kept.id}`, occasion: 'answer', channel: 'text', personId: who.actor.personId, escalationId: escalation?.id ?? null, siteId,
      toAddress: input.from, body: words, dueAt: ctx.now, expiresAt: new Date(ctx.now.getTime() + answerUntilMs), createdAt: ctx.now,
    }).returning({ id: messages.id })
    if (answer) await tx.insert(messageEvents).values({ messageId: answer.id, at: ctx.now, kind: 'queued' })
    return answer?.id
  })
  if (answerId) await notifyLive(ctx.db, 'escalation', siteId, escalation ? [escalation.id] : [])
  return true
}

/** Unscoped: the number is all that says who it is. One that two accounts share answers for nobody. */
async function unscopedFindPerson(ctx: SystemContext, from: string): Promise<{ actor: Actor } | undefined> {
  const rows = await ctx.db.select({ id: people.id, name: people.name, role: roles.role, siteId: roles.siteId, practiceId: roles.practiceId }).from(people)
    .leftJoin(roles, eq(roles.personId, people.id)).where(and(eq(people.phone, from), isNull(people.disabledAt)))
  const [first] = rows
  if (!first || rows.some(row => row.id !== first.id)) return undefined
  return { actor: { personId: first.id, name: first.name, roles: rows.flatMap(row => row.role ? [{ role: row.role, siteId: row.siteId, practiceId: row.practiceId }] : []) } }
}

/** Escalations this person was alerted to lately, newest alert first. */
async function alertsTo(ctx: SystemContext, personId: string): Promise<Escalation[]> {
  const rows = await ctx.db.select({ escalation: escalations, dueAt: messages.dueAt }).from(messages).innerJoin(escalations, eq(escalations.id, messages.escalationId))
    .where(and(eq(messages.personId, personId), ne(messages.kind, 'alert.answer'), ne(escalations.state, 'closed'), gte(messages.dueAt, new Date(ctx.now.getTime() - alertsWithinMs)))).orderBy(desc(messages.dueAt)).limit(60)
  return [...new Map(rows.map(row => [row.escalation.id, row.escalation])).values()]
}

async function act(ctx: ServiceContext, waiting: Escalation[], reading: ReturnType<typeof readAlertReply>, body: string): Promise<Answered> {
  const open = waiting.filter(each => each.state === 'open')
  const named = reading.number === undefined ? undefined : waiting.find(each => each.number === reading.number)
  if (reading.number !== undefined && !named) return { escalation: undefined, words: `Escalation ${reading.number} is none that you were told of. Open ${origin()}/escalations` }
  if (!named && open.length > 1 && reading.meaning !== 'words') return { escalation: undefined, words: `${open.length} wait for you. Reply ${open.slice(0, 3).map(each => `HAVE ${each.number}`).join(' or ')}.` }
  const escalation = named ?? open[0] ?? waiting[0]
  if (!escalation) return { escalation, words: `Nothing waits for you. ${origin()}/escalations` }
  try {
    return { escalation, words: await answer(ctx, escalation, reading.meaning, body) }
  }
  catch (error) {
    if (!(error instanceof DomainError)) throw error
    return { escalation, words: await whyNot(ctx, escalation, error) }
  }
}

async function answer(ctx: ServiceContext, { id, number, rowVersion }: Escalation, meaning: 'have' | 'hand-on' | 'words', body: string): Promise<string> {
  if (meaning === 'hand-on') {
    await handOnEscalation(ctx, { id })
    return `Escalation ${number}: the next person on call is told now.`
  }
  if (meaning === 'have') {
    await answerEscalation(ctx, { id, answer: 'acknowledge', words: 'Acknowledged by text.', rowVersion })
    return `Escalation ${number} is yours. When it is done, say what was done: ${origin()}/escalations`
  }
  await answerEscalation(ctx, { id, answer: 'record', words: `By text: ${body.trim().slice(0, 400)}`, rowVersion })
  return `Kept with escalation ${number}. It still needs an answer: reply HAVE, or open ${origin()}/escalations`
}

/** Why an answer did not count, in words for the person who believed it did. */
async function whyNot(ctx: ServiceContext, { id, number }: Escalation, error: DomainError): Promise<string> {
  const [now] = await ctx.db.select({ by: escalations.acknowledgedBy, name: people.name }).from(escalations).leftJoin(people, eq(people.id, escalations.acknowledgedBy)).where(eq(escalations.id, id))
  if (now?.by === ctx.actor.personId) return `Escalation ${number} is yours. When it is done, say what was done: ${origin()}/escalations`
  if (now?.name) return `Escalation ${number}: ${now.name} has it.`
  return `Escalation ${number} was not answered: ${error.message} Open ${origin()}/escalations`
}
