import { and, asc, eq, inArray, ne, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { pathways, patients, sites, theatreCases } from '#server/db/schema/index'
import type { theatreLists } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockList } from '#server/services/theatre/lock-list'
import { recordListChange, requireReason } from '#server/services/theatre/record-list-change'
import { retimeList } from '#server/services/theatre/retime-list'
import type { OrderListBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'
import { eyeLabel } from '#shared/domain/pathway/vocabulary'
import { breachesOf } from '#shared/domain/theatre/list-breaches'
import { orderBreachKinds } from '#shared/domain/theatre/list-constraints'

/** The cases of a list in order, with what the checks and a conflict need to name them. */
async function loadCases(tx: Transaction, listId: string) {
  return tx.select({ theatreCase: theatreCases, pathwayId: pathways.id, eye: pathways.eye, patientName: patients.name, zone: sites.zone }).from(theatreCases)
    .innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(and(eq(theatreCases.listId, listId), ne(theatreCases.state, 'cancelled'))).orderBy(asc(theatreCases.position), asc(theatreCases.id))
}
type Row = Awaited<ReturnType<typeof loadCases>>[number]

/** Puts the waiting cases of a list in another order; those done or under way keep their place before them. Every patient whose time changes is told anew. */
export async function orderList(ctx: ServiceContext, input: OrderListBody & { listId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const list = await lockList(tx, ctx.actor, input.listId)
    if (!may(ctx.actor, 'runTheatre', list.siteId)) throw new DomainError('theatre.not-allowed', 'A coordinator or surgeon of this site orders theatre lists.')
    const rows = await loadCases(tx, list.id)
    const waiting = rows.filter(row => row.theatreCase.state === 'planned')
    requireSame(list, waiting, input)
    if (list.endsAt <= ctx.now) throw new DomainError('theatre.conflict', 'This list is over.')
    requireReason(list, input.reason)
    const ordered = [...rows.filter(row => row.theatreCase.state !== 'planned'), ...input.order.map(id => waiting.find(row => row.theatreCase.id === id)!)]
    requireKept(list, ordered, input.reason)
    await tx.update(theatreCases).set({ position: sql`array_position(array[${sql.join(ordered.map(row => sql`${row.theatreCase.id}::uuid`), sql`, `)}], ${theatreCases.id})` }).where(inArray(theatreCases.id, ordered.map(row => row.theatreCase.id)))
    const changed = await recordListChange(tx, ctx, list, { kind: 'ordered', words: wordsOf(waiting, input.order), reason: input.reason, detail: { before: waiting.map(row => row.theatreCase.id), after: input.order } })
    await appendAudit(tx, { at: ctx.now, event: 'theatre.list-ordered', personId: ctx.actor.personId, subjectKind: 'list', subjectId: list.id, siteId: list.siteId, payload: { order: input.order } })
    await retimeList(tx, changed, ctx.now)
    return { list: changed, pathwayIds: rows.map(row => row.pathwayId) }
  })
  await notifyLive(ctx.db, 'pathway', done.list.siteId, done.pathwayIds)
  return done.list
}

/** The caller orders the list that they saw. One that changed meanwhile is answered with what it is now. */
function requireSame(list: typeof theatreLists.$inferSelect, waiting: Row[], input: OrderListBody): void {
  const same = input.order.length === waiting.length && new Set(input.order).size === waiting.length && waiting.every(row => input.order.includes(row.theatreCase.id))
  if (list.rowVersion === input.rowVersion && same) return
  throw new DomainError('theatre.stale', 'Somebody changed this list meanwhile. Look at both orders.', {
    detail: { current: { rowVersion: list.rowVersion, order: waiting.map(row => ({ id: row.theatreCase.id, patientName: row.patientName, eye: row.eye })) } },
  })
}

/** An order that breaks a constraint is somebody's decision, with a reason. */
function requireKept(list: typeof theatreLists.$inferSelect, ordered: Row[], reason: string): void {
  if (reason.trim().length >= 3) return
  const breaches = breachesOf({ startsAt: list.startsAt.toISOString(), zone: ordered[0]?.zone ?? 'UTC', anaesthetistFrom: list.anaesthetistFrom?.toISOString() ?? null, anaesthetistTo: list.anaesthetistTo?.toISOString() ?? null, cases: ordered.map(row => ({ id: row.theatreCase.id, patientName: row.patientName, eye: row.eye, constraints: row.theatreCase.constraints, plannedMinutes: row.theatreCase.plannedMinutes, state: row.theatreCase.state, endedAt: row.theatreCase.endedAt?.toISOString() ?? null })) })
    .filter(each => orderBreachKinds.includes(each.kind))
  if (breaches.length) throw new DomainError('theatre.reason-needed', 'This order breaks what a case needs. Say why it is right all the same.', { fields: [{ field: 'reason', code: 'required', message: breaches.map(each => each.sentence).join(' ') }], detail: { breaches } })
}

/** The first case that stands elsewhere, in words; the whole order is in the detail. */
function wordsOf(waiting: Row[], order: string[]): string {
  const moved = order.map((id, to) => ({ row: waiting.find(each => each.theatreCase.id === id)!, from: waiting.findIndex(each => each.theatreCase.id === id), to }))
    .sort((one, other) => Math.abs(other.from - other.to) - Math.abs(one.from - one.to))[0]
  return !moved || moved.from === moved.to ? 'Order confirmed' : `${moved.row.patientName}, ${eyeLabel(moved.row.eye).toLowerCase()}, moved ${moved.to < moved.from ? 'up' : 'down'} to waiting place ${moved.to + 1}`
}
