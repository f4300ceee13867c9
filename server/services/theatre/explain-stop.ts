import { and, eq } from 'drizzle-orm'
import { refusedConstraint } from '#server/db/refused-constraint'
import { safetyExplanations, safetyStops } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockCase } from '#server/services/theatre/load-case'
import type { ExplainStopBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

/** A surgeon signs why the case goes on all the same. The stop stays in the record, with these words on it. */
export async function explainStop(ctx: ServiceContext, input: ExplainStopBody & { caseId: string }) {
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const { theatreCase, list, loaded } = await lockCase(tx, ctx, input.caseId, 'explainStop', 'A surgeon of this site explains a stop.')
      const [stop] = await tx.select().from(safetyStops).where(and(eq(safetyStops.id, input.stopId), eq(safetyStops.caseId, input.caseId)))
      if (!stop) throw new DomainError('theatre.not-found', 'There is no such stop.')
      await tx.insert(safetyExplanations).values({ stopId: stop.id, words: input.words, signedBy: ctx.actor.personId, signedAt: ctx.now })
      await recordEvent(tx, ctx, loaded, { kind: 'stop-explained', words: `Stop explained: ${input.words}`, audit: 'theatre.stop-explained', payload: { caseId: theatreCase.id, stopId: stop.id } })
      return { siteId: list.siteId, pathwayId: theatreCase.pathwayId }
    })
    await notifyLive(ctx.db, 'pathway', done.siteId, [done.pathwayId])
    return done
  }
  catch (error) {
    if (refusedConstraint(error) === 'safety_explanations_pkey') throw new DomainError('theatre.already-signed', 'Another surgeon explained this stop already.')
    throw error
  }
}
