import { asc, desc, eq } from 'drizzle-orm'
import type { Queryable, Transaction } from '#server/db/client'
import { lensScans, safetyExplanations, safetySteps, safetyStops, theatreCases } from '#server/db/schema/index'
import { DomainError } from '#shared/domain/errors'
import { openStops } from '#shared/domain/theatre/safety-check'

/** Everything that the safety check of one case holds: signed steps, lenses held up, stops and the words on them. */
export async function loadCheck(db: Queryable, caseId: string) {
  const [steps, scans, stops] = await Promise.all([
    db.select().from(safetySteps).where(eq(safetySteps.caseId, caseId)).orderBy(asc(safetySteps.signedAt)),
    db.select().from(lensScans).where(eq(lensScans.caseId, caseId)).orderBy(desc(lensScans.scannedAt), desc(lensScans.id)).limit(20),
    db.select({ stop: safetyStops, explanation: safetyExplanations }).from(safetyStops).leftJoin(safetyExplanations, eq(safetyExplanations.stopId, safetyStops.id)).where(eq(safetyStops.caseId, caseId)).orderBy(asc(safetyStops.raisedAt)),
  ])
  const open = openStops({ stops: stops.map(each => each.stop), explainedStopIds: stops.flatMap(each => each.explanation ? [each.stop.id] : []), lastScanId: scans[0]?.id, signedSteps: steps.map(each => each.step) })
  return { steps, scans, stops, open }
}

/** An operation note is not signed over a stop that nobody explained. */
export async function requireNoOpenStop(tx: Transaction, caseId: string): Promise<void> {
  const { open } = await loadCheck(tx, caseId)
  if (open.length) throw new DomainError('theatre.requirements-unmet', 'The safety check of this case is stopped. A surgeon explains it first.', { detail: { stops: open.map(each => ({ id: each.id, step: each.step, reasons: each.reasons })) } })
}

/** The case is done. Where the check's last step was not signed, the operation ends when the note says it did. */
export async function finishCase(tx: Transaction, live: typeof theatreCases.$inferSelect, operatedAt: Date): Promise<void> {
  const endedAt = live.endedAt ?? (live.startedAt && operatedAt > live.startedAt ? operatedAt : null)
  await tx.update(theatreCases).set({ state: 'done', endedAt }).where(eq(theatreCases.id, live.id))
}
