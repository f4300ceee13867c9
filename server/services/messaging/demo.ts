import { and, asc, eq, gte, inArray, lte, sql } from 'drizzle-orm'
import { demoClock, messages, patients, people } from '#server/db/schema/index'
import { readFakes, tellFakes } from '#server/gateways/fakes'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { DomainError } from '#shared/domain/errors'

const lineBackMs = 24 * 3_600_000
const lineAheadMs = 7 * 24 * 3_600_000
const mostOnLine = 300

/** The demo's tools do not exist outside the demo. */
function requireDemo(): void {
  if (process.env.DAWNWARD_DEMO !== '1') throw new DomainError('demo.not-found', 'There is nothing here.')
}

/** Telephones and mail of the invented people, newest last, the faults that are on, and what waits. Unscoped: every name in the demo is invented. */
export async function unscopedReadDemo(ctx: SystemContext) {
  requireDemo()
  const fakes = await readFakes()
  const texts = fakes?.texts ?? []
  const numbers = [...new Set(texts.map(text => text.direction === 'to-patient' ? text.to : text.from))]
  const [known, staff, [waiting], line] = await Promise.all([
    numbers.length ? ctx.db.select({ phone: patients.phone, name: patients.name }).from(patients).where(inArray(patients.phone, numbers)) : [],
    numbers.length ? ctx.db.select({ phone: people.phone, name: people.name }).from(people).where(inArray(people.phone, numbers)) : [],
    ctx.db.select({ n: sql<number>`count(*)::int`, next: sql<string | null>`min(${messages.dueAt})` }).from(messages).where(and(eq(messages.state, 'queued'), gte(messages.expiresAt, ctx.now))),
    ctx.db.select({ id: messages.id, kind: messages.kind, state: messages.state, dueAt: messages.dueAt, sentAt: messages.sentAt }).from(messages)
      .where(and(inArray(messages.state, ['queued', 'sending', 'sent', 'delivered']), gte(messages.dueAt, new Date(ctx.now.getTime() - lineBackMs)), lte(messages.dueAt, new Date(ctx.now.getTime() + lineAheadMs)))).orderBy(asc(messages.dueAt)).limit(mostOnLine),
  ])
  const phones = numbers.map(number => ({
    number, name: known.find(each => each.phone === number)?.name ?? staff.find(each => each.phone === number)?.name ?? 'Nobody we know', isStaff: staff.some(each => each.phone === number),
    texts: texts.filter(text => (text.direction === 'to-patient' ? text.to : text.from) === number).slice(-30),
  })).sort((left, right) => (right.texts.at(-1)?.at ?? '').localeCompare(left.texts.at(-1)?.at ?? ''))
  return { now: ctx.now, connected: fakes !== undefined, mode: fakes?.state.mode ?? 'normal', failing: fakes?.state.failing ?? [], refuseMail: fakes?.state.refuseMail ?? false, line, phones: phones.slice(0, 12), mails: (fakes?.mails ?? []).slice(-40).reverse(), waiting: waiting?.n ?? 0, nextDueAt: waiting?.next ? new Date(waiting.next) : null }
}

export async function replyAsPatient(input: { from: string, body: string }): Promise<void> {
  requireDemo()
  await tellFakes('/control/reply', input)
}

export async function setDemoFault(input: { mode?: string, failing?: string[], refuseMail?: boolean }): Promise<void> {
  requireDemo()
  await tellFakes('/control/mode', input)
}

/** Moves the demo's clock forward for every process; it never goes back, since what was sent stays sent. */
export async function moveDemoClock(ctx: SystemContext, input: { minutes: number }): Promise<{ offsetSeconds: number }> {
  requireDemo()
  const moved = await ctx.db.transaction(async (tx) => {
    const [row] = await tx.update(demoClock).set({ offsetSeconds: sql`${demoClock.offsetSeconds} + ${input.minutes * 60}` }).where(eq(demoClock.id, 1)).returning()
    await appendAudit(tx, { at: ctx.now, event: 'demo.clock-moved', personId: null, subjectKind: 'demo', subjectId: 'clock', payload: { minutes: input.minutes } })
    return { offsetSeconds: row?.offsetSeconds ?? 0 }
  })
  await notifyLive(ctx.db, 'clock', null, [])
  return moved
}
