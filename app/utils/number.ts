/**
 * Reads what a person types: `17`, `-0.25`, `−0,25`, `+20.5`. Answers `null` for blank or unreadable text, so that
 * neither is ever taken for 0.
 */
export function parseNumber(text: string): number | null {
  const tidy = text.trim().replace(/^[−–]/, '-').replace(',', '.')
  return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(tidy) ? Number(tidy) : null
}

/** Three boxes into one calendar day, `YYYY-MM-DD`, or `null` when there is no such day. */
export function dateFromParts(day: string, month: string, year: string): string | null {
  if (!/^\d{1,2}$/.test(day) || !/^\d{1,2}$/.test(month) || !/^\d{4}$/.test(year)) return null
  const iso = `${year}-${month.padStart(2, '0')}-${day.padStart(2, '0')}`
  const real = new Date(`${iso}T00:00:00Z`)
  return !Number.isNaN(real.valueOf()) && real.toISOString().startsWith(iso) ? iso : null
}
