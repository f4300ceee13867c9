import type { ImportList, listImportRows } from '#server/services/referral/list-imports'
import { pageOfRows } from '#server/services/referral/list-imports'

type Listed = ImportList['files'][number]

export function presentImport({ file, siteName, personName, isStalled }: Listed) {
  return {
    id: file.id, siteId: file.siteId, siteName, personName, fileName: file.fileName, state: isStalled ? 'failed' as const : file.state, rowsDone: file.rowsDone,
    fates: { 'new': file.fates.new ?? 0, 'new-pathway': file.fates['new-pathway'] ?? 0, 'duplicate': file.fates.duplicate ?? 0, 'error': file.fates.error ?? 0 },
    failedWhy: isStalled ? 'Broken off. Send the file again.' : file.failedWhy, startedAt: file.startedAt.toISOString(), committedAt: file.committedAt?.toISOString() ?? null,
  }
}
export type ImportView = ReturnType<typeof presentImport>

export function presentImports({ files, sites }: ImportList) {
  return { files: files.map(presentImport), sites: sites.map(({ id, name }) => ({ id, name })) }
}
export type ImportsPage = ReturnType<typeof presentImports>

export function presentImportRows({ rows, ...file }: Awaited<ReturnType<typeof listImportRows>>) {
  return {
    file: presentImport(file),
    rows: rows.map(({ row, recordNumber }) => ({ line: row.line, fate: row.fate, name: row.data?.name ?? null, birthDate: row.data?.birthDate ?? null, eyes: row.data?.eyes ?? [], recordNumber, problems: row.problems.map(({ field, message }) => ({ field, message })) })),
    next: rows.length === pageOfRows ? rows.at(-1)?.row.line ?? null : null,
  }
}
export type ImportRowsPage = ReturnType<typeof presentImportRows>
