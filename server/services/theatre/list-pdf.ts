import { createRequire } from 'node:module'
import { Temporal } from 'temporal-polyfill'
import type { PrintedListView } from '#server/presenters/theatre'
import { plannedSpans } from '#shared/domain/theatre/day-plan'
import { printedCase } from '#shared/domain/theatre/printed-list'

interface Run { text: string, font?: string, bold?: boolean }
const files = ['latin', 'latin-ext'].flatMap(part => [400, 700].map(weight => `@fontsource/nunito-sans/files/nunito-sans-${part}-${weight}-normal.woff`))

/** Letters beyond Latin-1 are in a file of their own; a text is cut where they begin and end. */
export function runsOf(text: string, bold = false): Run[] {
  return text.split(/([\u0100-\u02FF\u1E00-\u1EFF]+)/).filter(Boolean).map(part => ({ text: part, ...(/[\u0100-\u02FF\u1E00-\u1EFF]/.test(part) ? { font: 'Wider' } : {}), ...(bold ? { bold } : {}) }))
}

/** The list as a PDF on A4 across. The writer and its letters are loaded when somebody prints, not before. */
export async function listPdf(list: PrintedListView): Promise<Buffer> {
  const { default: pdfmake } = await import('pdfmake')
  const { resolve } = createRequire(import.meta.url)
  const [plain, strong, wide, wideStrong] = files.map(file => resolve(file)) as [string, string, string, string]
  pdfmake.setFonts({ Nunito: { normal: plain, bold: strong }, Wider: { normal: wide, bold: wideStrong } })
  pdfmake.setUrlAccessPolicy(() => false)
  pdfmake.setLocalAccessPolicy(path => [plain, strong, wide, wideStrong].includes(path))
  return pdfmake.createPdf(documentOf(list)).getBuffer()
}

function documentOf(list: PrintedListView) {
  const time = (at: string) => Temporal.Instant.from(at).toZonedDateTimeISO(list.zone).toPlainTime().toString({ smallestUnit: 'minute' })
  const day = Temporal.Instant.from(list.startsAt).toZonedDateTimeISO(list.zone).toPlainDate().toLocaleString('en-GB', { weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' })
  const spans = plannedSpans(list.cases)
  const startOf = (index: number) => time(Temporal.Instant.from(list.startsAt).add({ minutes: spans[index]!.startMinute }).toString())
  const cell = (...lines: Run[][]) => ({ stack: lines.filter(line => line.length).map(text => ({ text })) })
  const rows = list.cases.map((one, index) => {
    const printed = printedCase(one)
    return [
      cell(runsOf(String(index + 1))), cell(runsOf(one.startedAt ? time(one.startedAt) : startOf(index), true)),
      cell(runsOf(one.patient.name, true), runsOf(`born ${one.patient.birthDate.split('-').reverse().join('.')}`), runsOf(one.patient.recordNumber)),
      cell(runsOf(printed.eye, true)), cell(runsOf(printed.lensPower, true), runsOf(printed.lensModel)), cell(runsOf(`${one.plannedMinutes} min`)), cell(runsOf(printed.know), runsOf(printed.bring)),
    ]
  })
  const changes = list.changesSinceLock.map(change => ({ text: runsOf(`${time(change.at)} ${change.words}, ${change.by}${change.reason ? `: ${change.reason}` : ''}`) }))
  return {
    info: { title: 'Theatre list', creator: 'Dawnward', producer: 'Dawnward' },
    pageSize: 'A4' as const, pageOrientation: 'landscape' as const, pageMargins: [36, 36, 36, 44] as [number, number, number, number],
    defaultStyle: { font: 'Nunito', fontSize: 9.5, lineHeight: 1.15 },
    content: [
      { text: runsOf(`${list.room}, ${list.surgeonName}`, true), fontSize: 15 },
      { text: runsOf(`${list.siteName}, ${day}, ${time(list.startsAt)} to ${time(list.endsAt)}. ${list.cases.length} ${list.cases.length === 1 ? 'eye' : 'eyes'}. ${list.lockedAt ? `Locked by ${list.lockedByName} at ${time(list.lockedAt)}.` : 'Not locked.'}`), margin: [0, 2, 0, 10] as [number, number, number, number] },
      { layout: 'lightHorizontalLines', table: { headerRows: 1, dontBreakRows: true, widths: [16, 36, 150, 62, 120, 44, '*'], body: [['', 'Start', 'Patient', 'Eye', 'Lens', 'Time', 'To know, to bring'].map(text => ({ text, bold: true })), ...rows] } },
      ...(changes.length ? [{ text: 'Changes since the lock', bold: true, margin: [0, 12, 0, 2] as [number, number, number, number] }, ...changes] : []),
    ],
    footer: (page: number, pages: number) => ({ margin: [36, 10, 36, 0] as [number, number, number, number], fontSize: 8, columns: [{ text: runsOf(`Printed ${time(list.printedAt)} by ${list.printedBy}. The record may have changed since.`) }, { text: `${page} of ${pages}`, alignment: 'right' as const, width: 60 }] }),
  }
}
