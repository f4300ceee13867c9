import { z } from 'zod'

/**
 * HL7 FHIR R4 (4.0.1), https://hl7.org/fhir/R4: the resources of a referral, element by element with type and cardinality, no element
 * that the specification does not have. What this service needs of them is asked afterwards, by name.
 */

// Primitive types: https://hl7.org/fhir/R4/datatypes.html
const text = z.string().regex(/[ \r\n\t\S]+/, 'A string may not be empty.').max(20_000)
const code = z.string().regex(/^[^\s]+(\s[^\s]+)*$/, 'Not a code.').max(200)
const id = z.string().regex(/^[A-Za-z0-9\-.]{1,64}$/, 'Not an id.')
const uri = z.string().regex(/^\S+$/, 'Not a URI.').max(2000)
const boolean = z.boolean()
const date = z.string().regex(/^\d{4}(-(0[1-9]|1[0-2])(-(0[1-9]|[12]\d|3[01]))?)?$/, 'Not a date.')
const dateTime = z.string().regex(/^\d{4}(-(0[1-9]|1[0-2])(-(0[1-9]|[12]\d|3[01])(T([01]\d|2[0-3]):[0-5]\d:([0-5]\d|60)(\.\d+)?(Z|[+-]((0\d|1[0-3]):[0-5]\d|14:00)))?)?)?$/, 'Not a dateTime.')
const instant = z.string().regex(/^\d{4}-(0[1-9]|1[0-2])-(0[1-9]|[12]\d|3[01])T([01]\d|2[0-3]):[0-5]\d:([0-5]\d|60)(\.\d+)?(Z|[+-]((0\d|1[0-3]):[0-5]\d|14:00))$/, 'Not an instant.')
const decimal = z.number()
const integer = z.int()
const positiveInt = z.int().positive()

const extension = z.looseObject({ url: uri })
const extensions = z.array(extension).max(200).optional()
/** What accompanies a primitive under its underscored name: its id and extensions. */
const beside = z.union([z.strictObject({ id: text.optional(), extension: extensions }), z.array(z.strictObject({ id: text.optional(), extension: extensions }).nullable())]).optional()

type Shape = Record<string, z.ZodType>
type Besides<S extends Shape> = { [K in keyof S as K extends string ? `_${K}` : never]: typeof beside }
/** An element with these children; each may have its underscored companion, as the JSON format says. */
function element<S extends Shape>(shape: S) {
  const besides = Object.fromEntries(Object.keys(shape).map(name => [`_${name}`, beside])) as Besides<S>
  return z.strictObject({ id: text.optional(), extension: extensions, modifierExtension: extensions, ...shape, ...besides })
}
const many = <T extends z.ZodType>(type: T) => z.array(type).min(1, 'An empty list is left out.').max(200).optional()

const period = element({ start: dateTime.optional(), end: dateTime.optional() })
const coding = element({ system: uri.optional(), version: text.optional(), code: code.optional(), display: text.optional(), userSelected: boolean.optional() })
export const codeableConcept = element({ coding: many(coding), text: text.optional() })
const identifierShape = { use: z.enum(['usual', 'official', 'temp', 'secondary', 'old']).optional(), type: codeableConcept.optional(), system: uri.optional(), value: text.optional(), period: period.optional() }
export const reference = element({ reference: text.optional(), type: uri.optional(), identifier: element({ ...identifierShape, assigner: z.looseObject({}).optional() }).optional(), display: text.optional() })
const identifier = element({ ...identifierShape, assigner: reference.optional() })
const humanName = element({ use: z.enum(['usual', 'official', 'temp', 'nickname', 'anonymous', 'old', 'maiden']).optional(), text: text.optional(), family: text.optional(), given: many(text), prefix: many(text), suffix: many(text), period: period.optional() })
const contactPoint = element({ system: z.enum(['phone', 'fax', 'email', 'pager', 'url', 'sms', 'other']).optional(), value: text.optional(), use: z.enum(['home', 'work', 'temp', 'old', 'mobile']).optional(), rank: positiveInt.optional(), period: period.optional() })
const address = element({ use: z.enum(['home', 'work', 'temp', 'old', 'billing']).optional(), type: z.enum(['postal', 'physical', 'both']).optional(), text: text.optional(), line: many(text), city: text.optional(), district: text.optional(), state: text.optional(), postalCode: text.optional(), country: text.optional(), period: period.optional() })
const attachment = element({ contentType: code.optional(), language: code.optional(), data: z.string().optional(), url: uri.optional(), size: z.int().min(0).optional(), hash: z.string().optional(), title: text.optional(), creation: dateTime.optional() })
const annotation = element({ authorReference: reference.optional(), authorString: text.optional(), time: dateTime.optional(), text })
const quantity = element({ value: decimal.optional(), comparator: z.enum(['<', '<=', '>=', '>']).optional(), unit: text.optional(), system: uri.optional(), code: code.optional() })
const ratio = element({ numerator: quantity.optional(), denominator: quantity.optional() })
const range = element({ low: quantity.optional(), high: quantity.optional() })
const timing = element({ event: many(dateTime), repeat: z.looseObject({}).optional(), code: codeableConcept.optional() })
const meta = element({ versionId: id.optional(), lastUpdated: instant.optional(), source: uri.optional(), profile: many(uri), security: many(coding), tag: many(coding) })
const narrative = element({ status: z.enum(['generated', 'extensions', 'additional', 'empty']), div: z.string().max(200_000) })
const gender = z.enum(['male', 'female', 'other', 'unknown'])

const domain = { id: id.optional(), meta: meta.optional(), implicitRules: uri.optional(), language: code.optional(), text: narrative.optional(), contained: z.array(z.looseObject({ resourceType: z.string() })).optional() }
const backbone = (shape: Shape) => many(element(shape))

export const fhirPatient = element({
  resourceType: z.literal('Patient'), ...domain, identifier: many(identifier), active: boolean.optional(), name: many(humanName), telecom: many(contactPoint), gender: gender.optional(), birthDate: date.optional(),
  deceasedBoolean: boolean.optional(), deceasedDateTime: dateTime.optional(), address: many(address), maritalStatus: codeableConcept.optional(), multipleBirthBoolean: boolean.optional(), multipleBirthInteger: integer.optional(), photo: many(attachment),
  contact: backbone({ relationship: many(codeableConcept), name: humanName.optional(), telecom: many(contactPoint), address: address.optional(), gender: gender.optional(), organization: reference.optional(), period: period.optional() }),
  communication: backbone({ language: codeableConcept, preferred: boolean.optional() }), generalPractitioner: many(reference), managingOrganization: reference.optional(),
  link: backbone({ other: reference, type: z.enum(['replaced-by', 'replaces', 'refer', 'seealso']) }),
})
export const fhirServiceRequest = element({
  resourceType: z.literal('ServiceRequest'), ...domain, identifier: many(identifier), instantiatesCanonical: many(uri), instantiatesUri: many(uri), basedOn: many(reference), replaces: many(reference), requisition: identifier.optional(),
  status: z.enum(['draft', 'active', 'on-hold', 'revoked', 'completed', 'entered-in-error', 'unknown']), intent: z.enum(['proposal', 'plan', 'directive', 'order', 'original-order', 'reflex-order', 'filler-order', 'instance-order', 'option']),
  category: many(codeableConcept), priority: z.enum(['routine', 'urgent', 'asap', 'stat']).optional(), doNotPerform: boolean.optional(), code: codeableConcept.optional(), orderDetail: many(codeableConcept),
  quantityQuantity: quantity.optional(), quantityRatio: ratio.optional(), quantityRange: range.optional(), subject: reference, encounter: reference.optional(), occurrenceDateTime: dateTime.optional(), occurrencePeriod: period.optional(), occurrenceTiming: timing.optional(),
  asNeededBoolean: boolean.optional(), asNeededCodeableConcept: codeableConcept.optional(), authoredOn: dateTime.optional(), requester: reference.optional(), performerType: codeableConcept.optional(), performer: many(reference), locationCode: many(codeableConcept), locationReference: many(reference),
  reasonCode: many(codeableConcept), reasonReference: many(reference), insurance: many(reference), supportingInfo: many(reference), specimen: many(reference), bodySite: many(codeableConcept), note: many(annotation), patientInstruction: text.optional(), relevantHistory: many(reference),
})
export const fhirPractitioner = element({
  resourceType: z.literal('Practitioner'), ...domain, identifier: many(identifier), active: boolean.optional(), name: many(humanName), telecom: many(contactPoint), address: many(address), gender: gender.optional(), birthDate: date.optional(), photo: many(attachment),
  qualification: backbone({ identifier: many(identifier), code: codeableConcept, period: period.optional(), issuer: reference.optional() }), communication: many(codeableConcept),
})
export const fhirOrganization = element({
  resourceType: z.literal('Organization'), ...domain, identifier: many(identifier), active: boolean.optional(), type: many(codeableConcept), name: text.optional(), alias: many(text), telecom: many(contactPoint), address: many(address), partOf: reference.optional(),
  contact: backbone({ purpose: codeableConcept.optional(), name: humanName.optional(), telecom: many(contactPoint), address: address.optional() }), endpoint: many(reference),
})
export const fhirResource = z.discriminatedUnion('resourceType', [fhirPatient, fhirServiceRequest, fhirPractitioner, fhirOrganization], 'A referral holds Patient, ServiceRequest, Practitioner and Organization.')
export type FhirResource = z.output<typeof fhirResource>
export type FhirPatient = z.output<typeof fhirPatient>
export type FhirServiceRequest = z.output<typeof fhirServiceRequest>
export type FhirConcept = z.output<typeof codeableConcept>

const entry = element({
  link: backbone({ relation: text, url: uri }), fullUrl: uri.optional(), resource: fhirResource, search: z.looseObject({}).optional(),
  request: element({ method: z.enum(['GET', 'HEAD', 'POST', 'PUT', 'DELETE', 'PATCH']), url: uri, ifNoneMatch: text.optional(), ifModifiedSince: instant.optional(), ifMatch: text.optional(), ifNoneExist: text.optional() }).optional(), response: z.looseObject({}).optional(),
})
export const referralBundle = element({
  resourceType: z.literal('Bundle', 'Send a Bundle.'), id: id.optional(), meta: meta.optional(), implicitRules: uri.optional(), language: code.optional(), identifier: identifier.optional(),
  type: z.enum(['transaction', 'batch', 'message', 'collection', 'document'], 'A referral comes as a transaction, batch, message, collection or document.'),
  timestamp: instant.optional(), total: z.int().min(0).optional(), link: backbone({ relation: text, url: uri }), entry: z.array(entry).min(2, 'A referral needs a Patient and a ServiceRequest at least.').max(500, 'Up to 500 entries.'), signature: z.looseObject({}).optional(),
})
export type ReferralBundle = z.output<typeof referralBundle>

/** Where in the bundle, as FHIRPath writes it: `Bundle.entry[2].resource.birthDate`. */
export function fhirPath(path: readonly PropertyKey[]): string {
  return ['Bundle', ...path].map(part => typeof part === 'number' ? `[${part}]` : `.${String(part)}`).join('').slice(1)
}
