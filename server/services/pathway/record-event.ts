import { eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { pathwayEvents, pathways } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import type { AuditEvent } from '#shared/domain/audit/events'

export interface RecordedEvent {
  kind: string
  words: string
  audit: AuditEvent
  detail?: Record<string, unknown>
  /** Ids, codes and versions only. */
  payload?: Record<string, unknown>
  /** What changes on the pathway itself. */
  change?: Partial<typeof pathways.$inferInsert>
}

/** Changes the pathway if asked, raises its row version, and leaves event and audit row: in the caller's transaction, on the locked row. */
export async function recordEvent(tx: Transaction, ctx: ServiceContext, { pathway }: Pick<LoadedPathway, 'pathway'>, event: RecordedEvent) {
  const [changed] = await tx.update(pathways).set({ ...event.change, rowVersion: sql`${pathways.rowVersion} + 1` }).where(eq(pathways.id, pathway.id)).returning()
  await tx.insert(pathwayEvents).values({ pathwayId: pathway.id, at: ctx.now, kind: event.kind, fromStage: pathway.stage, toStage: event.change?.stage ?? pathway.stage, personId: ctx.actor.personId, words: event.words, detail: event.detail ?? {} })
  await appendAudit(tx, { at: ctx.now, event: event.audit, personId: ctx.actor.personId, subjectKind: 'pathway', subjectId: pathway.id, siteId: pathway.siteId, payload: event.payload })
  return changed ?? pathway
}
