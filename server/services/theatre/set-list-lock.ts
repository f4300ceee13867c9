import { mayLockList } from '#server/policies/theatre'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockList } from '#server/services/theatre/lock-list'
import { recordListChange } from '#server/services/theatre/record-list-change'
import type { LockListBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

/** The surgeon says that the list stands; from then on every change carries a reason and is shown as one. Unlocking starts anew. */
export async function setListLock(ctx: ServiceContext, input: LockListBody & { listId: string, locked: boolean }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const list = await lockList(tx, ctx.actor, input.listId)
    if (!mayLockList(ctx.actor, list)) throw new DomainError('theatre.not-allowed', 'The surgeon of this list locks it, or a clinical lead.')
    if (list.rowVersion !== input.rowVersion) throw new DomainError('theatre.stale', 'Somebody changed this list meanwhile. Look at it again before you lock it.', { detail: { current: { rowVersion: list.rowVersion } } })
    if ((list.lockedAt !== null) === input.locked) throw new DomainError('theatre.conflict', input.locked ? 'This list is locked already.' : 'This list is not locked.')
    await appendAudit(tx, { at: ctx.now, event: input.locked ? 'theatre.list-locked' : 'theatre.list-unlocked', personId: ctx.actor.personId, subjectKind: 'list', subjectId: list.id, siteId: list.siteId })
    return recordListChange(tx, ctx, { ...list, lockedAt: null }, { kind: input.locked ? 'locked' : 'unlocked', words: input.locked ? 'List locked' : 'List unlocked' }, input.locked ? { lockedAt: ctx.now, lockedBy: ctx.actor.personId } : { lockedAt: null, lockedBy: null })
  })
  await notifyLive(ctx.db, 'pathway', changed.siteId, [])
  return changed
}
