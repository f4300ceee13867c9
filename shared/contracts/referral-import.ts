import { z } from 'zod'
import { rowFates } from '#shared/domain/referral/import-row'

export const importQuery = z.object({ siteId: z.uuid('Choose the site.') })
export const importRowsQuery = z.object({ fate: z.enum(rowFates).optional(), after: z.coerce.number().int().min(0).default(0) })
export type ImportRowsQuery = z.output<typeof importRowsQuery>

const cell = (max: number) => z.string().trim().max(max, `Shorten it to ${max} characters.`)
const optional = (max: number) => cell(max).transform(value => value || null)
const email = optional(200).refine(value => value === null || z.email().safeParse(value).success, 'Not an e-mail address. Correct it, or leave it empty.')

/** "12/03/1949" is read as day, month, year: the files come from this country's practices. */
function isoDate(given: string): string {
  const parts = /^(\d{1,2})\/(\d{1,2})\/(\d{4})$/.exec(given)
  return parts ? `${parts[3]}-${parts[2]?.padStart(2, '0')}-${parts[1]?.padStart(2, '0')}` : given
}
const date = cell(10).transform(isoDate).pipe(z.iso.date('Enter a date as 1949-03-12 or 12/03/1949.'))
const optionalDate = cell(10).transform(given => given ? isoDate(given) : null).pipe(z.iso.date('Enter a date as 2026-03-12 or 12/03/2026.').nullable())

const answers: Readonly<Record<string, boolean>> = { yes: true, y: true, true: true, no: false, n: false, false: false }
/** Empty: nobody asked, which is not a no. */
const yesNo = cell(10).transform((given, issue) => {
  if (!given) return null
  const answer = answers[given.toLowerCase()]
  if (answer === undefined) issue.addIssue({ code: 'custom', message: 'Answer yes or no, or leave it empty.' })
  return answer ?? null
})
const eyes = cell(10).transform((given, issue) => {
  const word = given.toLowerCase()
  if (word === 'both') return ['right', 'left'] as const
  if (word === 'right' || word === 'left') return [word] as const
  issue.addIssue({ code: 'custom', message: given ? `"${given}" is not an eye. Write right, left or both.` : 'Which eye? Write right, left or both.' })
  return z.NEVER
})
const priority = cell(10).transform(given => given.toLowerCase() || 'routine').pipe(z.enum(['routine', 'soon', 'urgent'], 'Write routine, soon or urgent, or leave it empty.'))

/** One line of a file, column by column. Every column is text; what is absent is empty. */
export const importColumns = z.object({
  name: cell(120).min(2, 'Enter the full name.'),
  birth_date: date,
  identifier: optional(40),
  telephone: optional(40),
  email,
  address: cell(300),
  message_consent: yesNo,
  eye: eyes,
  priority,
  referrer: cell(160).min(2, 'Who refers?'),
  referrer_email: email,
  reason: cell(2000).min(3, 'Why is the patient referred?'),
  vision_right: optional(40),
  vision_left: optional(40),
  sudden_loss: yesNo,
  pain_or_redness: yesNo,
  flashes_or_floaters: yesNo,
  referred_on: optionalDate,
})
export type ImportColumn = keyof z.output<typeof importColumns>
export const columnNames = Object.keys(importColumns.shape) as ImportColumn[]
/** A file without these columns is not a file of referrals. */
export const neededColumns: readonly ImportColumn[] = ['name', 'birth_date', 'eye', 'referrer', 'reason']
