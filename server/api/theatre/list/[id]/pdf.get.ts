import { setResponseHeader } from 'h3'
import { presentPrintedList } from '#server/presenters/theatre'
import { getList } from '#server/services/theatre/get-list'
import { listPdf } from '#server/services/theatre/list-pdf'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params, event }) => {
  const list = presentPrintedList(await getList(ctx, params.id), ctx.actor, ctx.now)
  const pdf = await listPdf(list)
  setResponseHeader(event, 'content-type', 'application/pdf')
  // No name of a patient or a surgeon in a file name that lands in a folder of downloads.
  setResponseHeader(event, 'content-disposition', `inline; filename="theatre-list-${list.startsAt.slice(0, 10)}.pdf"`)
  return pdf
})
