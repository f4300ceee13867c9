import { and, eq, gt, inArray, lt, or, sql } from 'drizzle-orm'
import { roles, theatreLists } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import type { AddListBody, ChangeListBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

const longestListMs = 14 * 3_600_000

/** One surgeon, one room, one session. A room and a surgeon are in one place at a time. */
export async function addList(ctx: ServiceContext, input: AddListBody) {
  if (!may(ctx.actor, 'runTheatre', input.siteId)) throw new DomainError('theatre.not-allowed', 'A coordinator or surgeon of this site makes theatre lists.')
  const startsAt = new Date(input.startsAt)
  const endsAt = new Date(input.endsAt)
  const problem = endsAt <= startsAt ? 'The list ends before it starts.' : endsAt.getTime() - startsAt.getTime() > longestListMs ? 'A list lasts 14 hours at most.' : endsAt <= ctx.now ? 'That time has passed.' : undefined
  if (problem) throw new DomainError('theatre.invalid', problem, { fields: [{ field: 'endsAt', code: 'out-of-range', message: problem }] })
  const anaesthetist = anaesthetistHours(input, { startsAt, endsAt })
  return ctx.db.transaction(async (tx) => {
    // Lists of one site are added one after the other, so that two cannot take one room at once.
    await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`theatre:${input.siteId}`}, 0))`)
    const [operates] = await tx.select({ id: roles.id }).from(roles).where(and(eq(roles.personId, input.surgeonId), eq(roles.siteId, input.siteId), inArray(roles.role, ['surgeon', 'clinical-lead']))).limit(1)
    if (!operates) throw new DomainError('theatre.invalid', 'This person does not operate at this site.', { fields: [{ field: 'surgeonId', code: 'unknown', message: 'Choose a surgeon of this site.' }] })
    const [clash] = await tx.select({ room: theatreLists.room }).from(theatreLists)
      .where(and(lt(theatreLists.startsAt, endsAt), gt(theatreLists.endsAt, startsAt), or(and(eq(theatreLists.siteId, input.siteId), eq(theatreLists.room, input.room)), eq(theatreLists.surgeonId, input.surgeonId)))).limit(1)
    if (clash) throw new DomainError('theatre.conflict', 'The room or the surgeon has another list at that time.')
    const [list] = await tx.insert(theatreLists).values({ siteId: input.siteId, surgeonId: input.surgeonId, room: input.room, startsAt, endsAt, ...anaesthetist }).returning()
    if (!list) throw new DomainError('theatre.conflict', 'The list could not be made.')
    await appendAudit(tx, { at: ctx.now, event: 'theatre.list-added', personId: ctx.actor.personId, subjectKind: 'list', subjectId: list.id, siteId: list.siteId })
    return list
  })
}

/** The anaesthetist's hours within the list's own, both or neither. */
export function anaesthetistHours({ anaesthetistFrom, anaesthetistTo }: Pick<ChangeListBody, 'anaesthetistFrom' | 'anaesthetistTo'>, list: { startsAt: Date, endsAt: Date }) {
  if (!anaesthetistFrom && !anaesthetistTo) return { anaesthetistFrom: null, anaesthetistTo: null }
  const from = anaesthetistFrom ? new Date(anaesthetistFrom) : list.startsAt
  const to = anaesthetistTo ? new Date(anaesthetistTo) : list.endsAt
  if (to <= from || to <= list.startsAt || from >= list.endsAt) {
    const message = 'The anaesthetist is there for some of the list, and leaves after coming.'
    throw new DomainError('theatre.invalid', message, { fields: [{ field: 'anaesthetistTo', code: 'out-of-range', message }] })
  }
  return { anaesthetistFrom: from, anaesthetistTo: to }
}
