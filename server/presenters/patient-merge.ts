import type { listMerges } from '#server/services/patient/list-merges'

export function presentMerges({ rows, canUndo }: Awaited<ReturnType<typeof listMerges>>) {
  return { merges: rows.map(({ merge, recordNumber, name, personName }) => ({ id: merge.id, recordNumber, name, reason: merge.reason, signedAt: merge.signedAt.toISOString(), signedBy: personName })), abilities: { canUndo } }
}
export type MergesView = ReturnType<typeof presentMerges>
