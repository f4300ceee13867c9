import { fhirPath, referralBundle } from '#shared/contracts/fhir'
import type { FhirConcept, FhirPatient, FhirResource, FhirServiceRequest, ReferralBundle } from '#shared/contracts/fhir'
import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'
import { columnNames } from '#shared/contracts/referral-import'
import type { ImportColumn } from '#shared/contracts/referral-import'
import { readLine } from '#server/services/referral/read-line'
import type { LineRules } from '#server/services/referral/read-line'
import type { ImportedReferral } from '#shared/domain/referral/import-row'

export interface BundledReferral { entry: number, data: ImportedReferral }

/** SNOMED CT: the eye of a request, in `bodySite`. */
const snomed = 'http://snomed.info/sct'
const eyeCodes: Readonly<Record<string, 'right' | 'left' | 'both'>> = { '18944008': 'right', '362502000': 'right', '8966001': 'left', '362503005': 'left', '40638003': 'both', '362508001': 'both' }
const eyeWords: Readonly<Record<string, 'right' | 'left' | 'both'>> = { 'right eye': 'right', 'left eye': 'left', 'both eyes': 'both' }
const nhsNumberSystem = 'https://fhir.nhs.uk/Id/nhs-number'
const priorities = { routine: 'routine', asap: 'soon', urgent: 'urgent', stat: 'urgent' } as const

/**
 * The referrals of a Bundle: structure by the specification, then what a referral needs here. Everything wrong is named by its path,
 * and with anything wrong nothing is read.
 */
export function readBundle(body: unknown, rules: LineRules): BundledReferral[] {
  const parsed = referralBundle.safeParse(body)
  if (!parsed.success) throw refusal(parsed.error.issues.slice(0, 50).map(issue => ({ field: fhirPath(issue.path), code: 'structure', message: issue.code === 'unrecognized_keys' ? `The specification has no element ${issue.keys.map(key => `"${key}"`).join(', ')} here.` : issue.message })))
  const bundle = parsed.data
  const problems: FieldProblem[] = []
  const read = bundle.entry.flatMap(({ resource }, index) => resource.resourceType === 'ServiceRequest' ? [readRequest(bundle, resource, index, rules, problems)] : [])
  if (!read.length) problems.push({ field: 'Bundle.entry', code: 'required', message: 'There is no ServiceRequest: nothing is asked for.' })
  if (problems.length) throw refusal(problems)
  return joinEyes(read.filter(each => each !== undefined))
}

function refusal(fields: FieldProblem[]): DomainError {
  return new DomainError('referral.invalid', 'This bundle is not a referral that can be taken in. Nothing was stored.', {
    fields, detail: { issue: fields.map(each => ({ severity: 'error', code: each.code === 'required' ? 'required' : each.code === 'structure' ? 'structure' : 'invalid', diagnostics: each.message, expression: [each.field] })) },
  })
}

/** What a reference leads to within the bundle: by full URL, or by `Type/id`. */
function resolve<T extends FhirResource['resourceType']>(bundle: ReferralBundle, target: string | undefined, types: readonly T[]): { resource: Extract<FhirResource, { resourceType: T }>, entry: number } | undefined {
  if (!target) return undefined
  const entry = bundle.entry.findIndex(each => each.fullUrl === target || `${each.resource.resourceType}/${each.resource.id}` === target || (each.fullUrl?.endsWith(`/${target}`) ?? false))
  const resource = bundle.entry[entry]?.resource
  return resource && types.some(type => type === resource.resourceType) ? { resource: resource as Extract<FhirResource, { resourceType: T }>, entry } : undefined
}

function readRequest(bundle: ReferralBundle, request: FhirServiceRequest, entry: number, rules: LineRules, problems: FieldProblem[]): BundledReferral | undefined {
  const before = problems.length
  const at = (path: string) => `Bundle.entry[${entry}].resource.${path}`
  const refuse = (path: string, message: string, code = 'invalid') => void problems.push({ field: at(path), code, message })
  if (request.status !== 'active') refuse('status', `A request that is ${request.status} is not taken in; an active one is.`)
  if (request.doNotPerform) refuse('doNotPerform', 'This asks for something not to be done.')
  const subject = resolve(bundle, request.subject.reference, ['Patient'])
  if (!subject) refuse('subject', 'The Patient that this points to is not in the bundle.', 'required')
  const eye = eyeOf(request.bodySite)
  if (!eye) refuse('bodySite', 'Which eye? Give a SNOMED CT code (18944008 right, 8966001 left, 40638003 both) or "Right eye", "Left eye", "Both eyes".', 'required')
  if (eye === 'several') refuse('bodySite', 'The code and the words, or two entries, name different eyes. For both eyes use 40638003.')
  const requester = resolve(bundle, request.requester?.reference, ['Practitioner', 'Organization'])
  const referrer = requester ? nameOf(requester.resource) : request.requester?.display
  if (!referrer) refuse('requester', 'Who refers? Point to a Practitioner or Organization in the bundle, or give a display name.', 'required')
  const reason = [...request.reasonCode ?? [], ...request.code ? [request.code] : []].map(wordsOf).filter(Boolean).join('; ')
  if (!reason) refuse('reasonCode', 'Why is the patient referred? Give reasonCode or code with text or a display.', 'required')
  if (!subject || problems.length > before) return undefined
  const { cells, places } = cellsOf(subject, { eye: eye ?? '', referrer: referrer ?? '', reason: [reason, ...(request.note ?? []).map(note => note.text)].join('. ').slice(0, 2000), priority: priorities[request.priority ?? 'routine'], referred_on: request.authoredOn?.slice(0, 10) ?? '', referrer_email: telecomOf(requester?.resource.telecom, 'email') })
  const line = readLine(cells, rules)
  problems.push(...line.problems.map(each => ({ ...each, field: places[each.field as ImportColumn] ?? at('(request)') })))
  return line.data ? { entry, data: line.data } : undefined

  type Subject = NonNullable<typeof subject>
  function cellsOf({ resource: patient, entry: patientEntry }: Subject, asked: Partial<Record<ImportColumn, string>>) {
    const inPatient = (path: string) => `Bundle.entry[${patientEntry}].resource.${path}`
    const cells: Partial<Record<ImportColumn, string>> = { ...asked, name: personName(patient), birth_date: patient.birthDate ?? '', identifier: identifierOf(patient), telephone: telecomOf(patient.telecom, 'phone') || telecomOf(patient.telecom, 'sms'), email: telecomOf(patient.telecom, 'email'), address: addressOf(patient) }
    if (patient.deceasedBoolean || patient.deceasedDateTime) problems.push({ field: inPatient(patient.deceasedBoolean ? 'deceasedBoolean' : 'deceasedDateTime'), code: 'died', message: 'This patient has died.' })
    const places: Partial<Record<ImportColumn, string>> = { name: inPatient('name'), birth_date: inPatient('birthDate'), identifier: inPatient('identifier'), telephone: inPatient('telecom'), email: inPatient('telecom'), address: inPatient('address'), eye: at('bodySite'), referrer: at('requester'), referrer_email: at('requester'), reason: at('reasonCode'), priority: at('priority'), referred_on: at('authoredOn') }
    return { cells: Object.fromEntries(columnNames.map(name => [name, cells[name] ?? ''])), places }
  }
}

function eyeOf(sites: FhirConcept[] | undefined): 'right' | 'left' | 'both' | 'several' | undefined {
  const named = (sites ?? []).flatMap(site => [...(site.coding ?? []).map(each => each.system === snomed ? eyeCodes[each.code ?? ''] : undefined), eyeWords[site.text?.trim().toLowerCase() ?? '']]).filter(each => each !== undefined)
  const different = new Set(named)
  return different.size > 1 ? 'several' : named[0]
}

const wordsOf = (concept: FhirConcept) => concept.text ?? concept.coding?.find(each => each.display)?.display ?? ''

function personName(person: Pick<FhirPatient, 'name'>): string {
  const names = person.name ?? []
  const name = names.find(each => each.use === 'official') ?? names.find(each => each.use === 'usual') ?? names.find(each => each.use !== 'old' && each.use !== 'maiden') ?? names[0]
  return name ? name.text ?? [...name.given ?? [], name.family ?? ''].filter(Boolean).join(' ') : ''
}

function nameOf(resource: Extract<FhirResource, { resourceType: 'Practitioner' | 'Organization' }>): string {
  return resource.resourceType === 'Organization' ? resource.name ?? '' : personName(resource)
}

/** The NHS number when there is one, else the official or the first identifier that is not out of use. */
function identifierOf({ identifier = [] }: FhirPatient): string {
  const usable = identifier.filter(each => each.value && each.use !== 'old' && each.use !== 'temp')
  return (usable.find(each => each.system === nhsNumberSystem) ?? usable.find(each => each.use === 'official') ?? usable[0])?.value ?? ''
}

function telecomOf(telecom: FhirPatient['telecom'], system: 'phone' | 'sms' | 'email'): string {
  const usable = (telecom ?? []).filter(each => each.system === system && each.use !== 'old' && each.value)
  return (usable.find(each => each.use === 'mobile') ?? usable[0])?.value ?? ''
}

function addressOf({ address = [] }: FhirPatient): string {
  const where = address.find(each => each.use !== 'old')
  return where ? where.text ?? [...where.line ?? [], where.city, where.postalCode].filter(Boolean).join(', ') : ''
}

/** Two requests for the two eyes of one person are one referral of both. */
function joinEyes(read: readonly BundledReferral[]): BundledReferral[] {
  const joined: BundledReferral[] = []
  for (const each of read) {
    const other = joined.find(one => one.data.name === each.data.name && one.data.birthDate === each.data.birthDate && one.data.identifier === each.data.identifier && !one.data.eyes.some(eye => each.data.eyes.includes(eye)))
    if (other) other.data = { ...other.data, eyes: [...other.data.eyes, ...each.data.eyes] }
    else joined.push(each)
  }
  return joined
}
