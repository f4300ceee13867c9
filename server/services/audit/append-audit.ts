import type { Queryable } from '#server/db/client'
import { auditRows } from '#server/db/schema/index'
import type { AuditEvent } from '#shared/domain/audit/events'

export interface AuditEntry {
  at: Date
  event: AuditEvent
  personId: string | null
  subjectKind: string
  subjectId: string
  siteId?: string | null
  /** Ids, codes and versions; never findings or a patient's words. */
  payload?: Record<string, unknown>
}

/** Writes the audit row in the caller's transaction, so that the fact and its trace commit together. */
export async function appendAudit(tx: Queryable, entry: AuditEntry): Promise<void> {
  await tx.insert(auditRows).values({ ...entry, siteId: entry.siteId ?? null, payload: entry.payload ?? {} })
}
