import { telephoneFrom } from '#server/services/patient/telephone'
import { columnNames, importColumns } from '#shared/contracts/referral-import'
import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import { identifierFrom, identifierProblem } from '#shared/domain/patient/identifier'
import type { IdentifierCheck } from '#shared/domain/patient/identifier'
import type { ImportedReferral } from '#shared/domain/referral/import-row'

export interface ReadLine { data: ImportedReferral | null, problems: FieldProblem[] }
export interface LineRules { identifierCheck: IdentifierCheck, today: string }

/** One line of a file, read and checked column by column; every problem names its column. */
export function readLine(record: Readonly<Record<string, string | undefined>>, rules: LineRules): ReadLine {
  const cells = Object.fromEntries(columnNames.map(name => [name, record[name] ?? '']))
  if (Object.values(record).some(value => value?.includes('\0'))) return { data: null, problems: [{ field: '(line)', code: 'unreadable', message: 'The line holds a character that cannot be stored.' }] }
  const parsed = importColumns.safeParse(cells)
  if (!parsed.success) return { data: null, problems: parsed.error.issues.map(issue => ({ field: String(issue.path[0] ?? '(line)'), code: issue.code, message: issue.message })) }
  const { telephone, birth_date: birthDate, message_consent: messageConsent, eye, referrer_email: referrerEmail, vision_right: visionRight, vision_left: visionLeft, referred_on: referredOn, ...rest } = parsed.data
  const identifier = identifierFrom(rest.identifier)
  const problems = [identifierProblem(identifier, rules.identifierCheck), inThePast('birth_date', birthDate, rules.today), referredOn ? inThePast('referred_on', referredOn, rules.today) : undefined].filter(each => each !== undefined)
  const phone = read(() => telephoneFrom(telephone, 'telephone'), problems)
  if (problems.length) return { data: null, problems }
  const redFlags = Object.fromEntries([['suddenLoss', rest.sudden_loss], ['painOrRedness', rest.pain_or_redness], ['flashesOrFloaters', rest.flashes_or_floaters]].filter(([, answer]) => answer !== null)) as Record<string, boolean>
  return {
    data: { name: rest.name.replace(/\s+/g, ' '), birthDate, identifier, phone: phone ?? null, email: rest.email, address: rest.address, messageConsent, eyes: [...eye], priority: rest.priority, referrer: rest.referrer, referrerEmail, reason: rest.reason, visionRight, visionLeft, redFlags, referredOn },
    problems: [],
  }
}

function inThePast(field: string, date: string, today: string): FieldProblem | undefined {
  if (date > today) return { field, code: 'out-of-range', message: 'This day lies in the future.' }
  if (date < '1900-01-01') return { field, code: 'out-of-range', message: 'This day is before 1900.' }
  return undefined
}

function read<T>(work: () => T, problems: FieldProblem[]): T | undefined {
  try {
    return work()
  }
  catch (error) {
    if (!(error instanceof DomainError)) throw error
    problems.push(...error.fields)
    return undefined
  }
}
