import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { anaesthetistHours } from '#server/services/theatre/add-list'
import { lockList } from '#server/services/theatre/lock-list'
import { recordListChange, requireReason } from '#server/services/theatre/record-list-change'
import type { ChangeListBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

/** When an anaesthetist is in the room. */
export async function changeList(ctx: ServiceContext, input: ChangeListBody & { listId: string }) {
  const changed = await ctx.db.transaction(async (tx) => {
    const list = await lockList(tx, ctx.actor, input.listId)
    if (!may(ctx.actor, 'runTheatre', list.siteId)) throw new DomainError('theatre.not-allowed', 'A coordinator or surgeon of this site changes theatre lists.')
    if (list.rowVersion !== input.rowVersion) throw new DomainError('theatre.stale', 'Somebody changed this list meanwhile. Look at it again.', { detail: { current: { rowVersion: list.rowVersion } } })
    requireReason(list, input.reason)
    const hours = anaesthetistHours(input, list)
    await appendAudit(tx, { at: ctx.now, event: 'theatre.case-constraints', personId: ctx.actor.personId, subjectKind: 'list', subjectId: list.id, siteId: list.siteId })
    return recordListChange(tx, ctx, list, { kind: 'constraints', words: hours.anaesthetistFrom ? 'Hours of the anaesthetist changed' : 'No anaesthetist', reason: input.reason }, hours)
  })
  await notifyLive(ctx.db, 'pathway', changed.siteId, [])
  return changed
}
