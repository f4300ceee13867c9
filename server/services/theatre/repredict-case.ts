import { and, desc, eq } from 'drizzle-orm'
import { riskAssessments, theatreCases, theatreLists } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { lockList } from '#server/services/theatre/lock-list'
import { loadPastCases, modelOf, plannedMinutesOf } from '#server/services/theatre/predict-minutes'
import { recordListChange } from '#server/services/theatre/record-list-change'
import { retimeList } from '#server/services/theatre/retime-list'

/**
 * A risk found after an eye was listed gives its waiting case other minutes, and the list other times, unless a person set them.
 * In a transaction of its own after the risk is stored: a list is always locked before the pathways on it.
 */
export async function repredictCase(ctx: ServiceContext, pathwayId: string): Promise<void> {
  await ctx.db.transaction(async (tx) => {
    const [found] = await tx.select({ listId: theatreCases.listId }).from(theatreCases).innerJoin(theatreLists, eq(theatreLists.id, theatreCases.listId)).where(and(eq(theatreCases.pathwayId, pathwayId), eq(theatreCases.state, 'planned'), eq(theatreCases.minutesByHand, false)))
    if (!found) return
    const list = await lockList(tx, ctx.actor, found.listId)
    const [[risk], past] = await Promise.all([
      tx.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, pathwayId)).orderBy(desc(riskAssessments.version)).limit(1),
      loadPastCases(tx, [list.surgeonId]),
    ])
    const plannedMinutes = plannedMinutesOf(risk, modelOf(past, list.surgeonId))
    const [waiting] = await tx.select().from(theatreCases).where(and(eq(theatreCases.pathwayId, pathwayId), eq(theatreCases.listId, list.id), eq(theatreCases.state, 'planned')))
    if (!waiting || waiting.minutesByHand || waiting.plannedMinutes === plannedMinutes) return
    await tx.update(theatreCases).set({ plannedMinutes }).where(eq(theatreCases.id, waiting.id))
    const changed = await recordListChange(tx, ctx, list, { kind: 'constraints', words: `A case takes ${plannedMinutes} instead of ${waiting.plannedMinutes} minutes`, reason: 'Risk assessed anew', detail: { caseId: waiting.id } })
    await retimeList(tx, changed, ctx.now)
  })
}
