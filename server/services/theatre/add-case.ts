import { desc, eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import type { patients, theatreLists } from '#server/db/schema/index'
import { riskAssessments, theatreCases } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockList } from '#server/services/theatre/lock-list'
import { loadPastCases, modelOf, plannedMinutesOf } from '#server/services/theatre/predict-minutes'
import { recordListChange, requireReason } from '#server/services/theatre/record-list-change'
import { retimeList } from '#server/services/theatre/retime-list'
import type { AddCaseBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'
import type { CaseConstraints } from '#shared/domain/theatre/list-constraints'

/** Puts one eye on one list, last, with the minutes that its risk and its surgeon's own cases predict unless the caller says otherwise. */
export async function addCase(ctx: ServiceContext, input: AddCaseBody & { listId: string }) {
  try {
    const added = await ctx.db.transaction(async (tx) => {
      const list = await lockList(tx, ctx.actor, input.listId)
      const added = await insertCase(tx, ctx, list, input)
      requireReason(list, input.reason)
      const later = await recordListChange(tx, ctx, list, { kind: 'added', words: `${added.patientName} added`, reason: input.reason, detail: { added: added.case.id } })
      await retimeList(tx, later, ctx.now)
      return { case: added.case, siteId: list.siteId }
    })
    await notifyLive(ctx.db, 'pathway', added.siteId, [input.pathwayId])
    return added.case
  }
  catch (error) {
    if (refusedConstraint(error) === 'theatre_cases_live') throw new DomainError('theatre.conflict', 'This eye is on a list already. Cancel that case first.')
    throw error
  }
}

/** The row of the case, for an act that holds the list. Last unless a place is given. */
export async function insertCase(tx: Transaction, ctx: ServiceContext, list: typeof theatreLists.$inferSelect, input: { pathwayId: string, plannedMinutes?: number, position?: number }) {
  const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'runTheatre', refusal: 'A coordinator or surgeon of this site fills theatre lists.' })
  requireOpen(loaded.pathway)
  const { pathway } = loaded
  if (pathway.operatedAt || (pathway.stage !== 'biometry' && pathway.stage !== 'surgery')) throw new DomainError('pathway.transition-not-allowed', 'An eye goes on a list after its referral is accepted and before it is operated.')
  if (list.siteId !== pathway.siteId) throw new DomainError('theatre.not-found', 'There is no such list at this site.')
  if (list.endsAt <= ctx.now) throw new DomainError('theatre.conflict', 'This list is over.')
  const [[risk], [last], past] = await Promise.all([
    tx.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, pathway.id)).orderBy(desc(riskAssessments.version)).limit(1),
    tx.select({ position: sql<number>`coalesce(max(${theatreCases.position}), 0)::int` }).from(theatreCases).where(eq(theatreCases.listId, list.id)),
    loadPastCases(tx, [list.surgeonId]),
  ])
  const plannedMinutes = input.plannedMinutes ?? plannedMinutesOf(risk, modelOf(past, list.surgeonId))
  const [added] = await tx.insert(theatreCases).values({ listId: list.id, pathwayId: pathway.id, position: input.position ?? (last?.position ?? 0) + 1, plannedMinutes, minutesByHand: input.plannedMinutes !== undefined, constraints: knownConstraints(loaded.patient) }).returning()
  if (!added) throw new DomainError('theatre.conflict', 'The case could not be added.')
  await recordEvent(tx, ctx, loaded, { kind: 'case-added', words: `On the list of ${list.room}`, audit: 'theatre.case-added', payload: { caseId: added.id, listId: list.id } })
  return { case: added, patientName: loaded.patient.name }
}

/** What the record says already; what it does not say is asked on the list. */
function knownConstraints({ alerts, riskReasons }: typeof patients.$inferSelect): CaseConstraints {
  return {
    ...(alerts.some(alert => alert.kind === 'allergy' && /latex/i.test(alert.words)) ? { latexAllergy: true } : {}),
    ...(riskReasons.some(reason => /diabet/i.test(reason)) || alerts.some(alert => /diabet/i.test(alert.words)) ? { diabetic: true } : {}),
  }
}
