import { z } from 'zod'
import { languages } from '#shared/domain/messaging/vocabulary'
import { eyes } from '#shared/domain/pathway/vocabulary'
import { redFlagIds } from '#shared/domain/referral/red-flags'

export const findPatientsQuery = z.object({
  find: z.string().trim().min(2, 'Type two letters or more.').max(80),
  /** The last row of the page before. */
  afterName: z.string().max(200).optional(),
  afterId: z.uuid().optional(),
}).refine(query => (query.afterName === undefined) === (query.afterId === undefined), { message: 'A page mark is a name and an id.', path: ['afterId'] })
export type FindPatientsQuery = z.output<typeof findPatientsQuery>

const text = (max: number) => z.string().trim().max(max)
const optionalText = (max: number) => text(max).nullable().default(null).transform(value => value || null)
const email = optionalText(200).refine(value => value === null || z.email().safeParse(value).success, 'Enter an e-mail address, or leave it empty.')

const contacts = {
  phone: optionalText(40),
  email,
  address: text(300).default(''),
  language: z.enum(languages).default('en'),
  preferredChannel: z.enum(['text', 'email', 'call']).default('text'),
  /** Null: not asked yet. False: asked and refused. */
  messageConsent: z.boolean().nullable().default(null),
  wantsDetail: z.boolean().default(false),
  wantsDropsReminders: z.boolean().default(false),
  needsTransport: z.boolean().default(false),
  interpreterLanguage: optionalText(60),
  carer: z.strictObject({ name: text(120).min(2, 'Enter the carer’s name.'), phone: text(40).min(5, 'Enter the carer’s telephone.') }).nullable().default(null),
}
export const contactsBody = z.strictObject({ ...contacts, numberConfirmed: z.boolean().default(false), rowVersion: z.int().positive() })
export type ContactsBody = z.output<typeof contactsBody>
export type ContactsInput = z.input<typeof contactsBody>

export const redFlagsSchema = z.partialRecord(z.enum(redFlagIds), z.boolean())
const alert = z.strictObject({ kind: z.enum(['allergy', 'communication', 'safety', 'clinical']), words: text(200).min(2) })

const newPatient = z.strictObject({
  ...contacts,
  name: text(120).min(2, 'Enter the full name.'),
  birthDate: z.iso.date('Enter the birth date.'),
  identifier: optionalText(40),
  alerts: z.array(alert).max(20).default([]),
})
const newReferral = z.strictObject({
  referrer: text(160).min(2, 'Who refers?'),
  referrerEmail: email,
  reason: text(2000).min(3, 'Why is the patient referred?'),
  visionRight: optionalText(40),
  visionLeft: optionalText(40),
  redFlags: redFlagsSchema.default({}),
})
export const addPatientBody = z.strictObject({
  siteId: z.uuid('Choose the site.'),
  /** A patient who is already here gets the new pathway; otherwise a new patient is made. */
  patientId: z.uuid().optional(),
  patient: newPatient.optional(),
  eyes: z.array(z.enum(eyes)).min(1, 'Choose the eye.').max(2).refine(given => new Set(given).size === given.length, 'Each eye once.'),
  priority: z.enum(['routine', 'soon', 'urgent']).default('routine'),
  referral: newReferral,
  /** The people alike were looked at, and this is another person. */
  confirmedNew: z.boolean().default(false),
}).refine(body => (body.patient === undefined) !== (body.patientId === undefined), { message: 'Name a patient who is here, or describe a new one.', path: ['patient'] })
export type AddPatientBody = z.output<typeof addPatientBody>
export type AddPatientInput = z.input<typeof addPatientBody>

const reason = text(500).min(3, 'Say in a few words how you know.')
export const mergeBody = z.strictObject({
  /** The record that ends: everything of it goes to the record in the address. */
  mergedId: z.uuid(),
  reason,
  keptRowVersion: z.int().positive(),
  mergedRowVersion: z.int().positive(),
})
export type MergeBody = z.output<typeof mergeBody>
export const unmergeBody = z.strictObject({ reason })
export type UnmergeBody = z.output<typeof unmergeBody>
