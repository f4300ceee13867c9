/**
 * One cell of a CSV file that a person will open in a spreadsheet. What would be read there as a formula (a first `=`, `+`, `-`, `@`,
 * tab or return, also behind spaces) is led by an apostrophe; quotes are doubled. Source: OWASP, "CSV Injection".
 */
export function csvCell(value: string | number | null): string {
  if (value === null) return ''
  if (typeof value === 'number') return String(value)
  const harmless = /^[\s\0]*[=+\-@\t\r＝＋－＠]/.test(value) ? `'${value}` : value
  return /[",\r\n']/.test(harmless) ? `"${harmless.replaceAll('"', '""')}"` : harmless
}

export function csvLine(cells: readonly (string | number | null)[]): string {
  return `${cells.map(csvCell).join(',')}\r\n`
}
