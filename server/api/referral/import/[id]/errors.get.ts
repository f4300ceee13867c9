import { setResponseHeader } from 'h3'
import { exportLeftBehind, listImportRows } from '#server/services/referral/list-imports'
import { defineStaffApi, idParams } from '#server/utils/api'
import { csvLine } from '#shared/domain/referral/csv-cell'
import { fateLabels } from '#shared/domain/referral/import-row'

/** The lines that were left behind and why, as a file that a spreadsheet opens without running anything in it. */
export default defineStaffApi({ params: idParams }, async ({ ctx, params, event }) => {
  await listImportRows(ctx, params.id, { after: 0 })
  let text = csvLine(['line', 'fate', 'name', 'birth_date', 'column', 'what_to_do'])
  for await (const rows of exportLeftBehind(ctx, params.id)) {
    for (const { row } of rows) for (const problem of row.problems) text += csvLine([row.line, fateLabels[row.fate], row.data?.name ?? null, row.data?.birthDate ?? null, problem.field, problem.message])
  }
  setResponseHeader(event, 'content-type', 'text/csv; charset=utf-8')
  setResponseHeader(event, 'content-disposition', 'attachment; filename="referrals-left-behind.csv"')
  setResponseHeader(event, 'x-content-type-options', 'nosniff')
  return text
})
