import { and, eq, inArray } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import type { escalations, pathways, patients, sites, visits } from '#server/db/schema/index'
import { messageEvents, messages } from '#server/db/schema/index'
import type { Reachable } from '#server/services/escalation/find-surgeon'
import { keepMessages, linkMark } from '#server/services/messaging/keep-messages'
import type { NewMessage } from '#server/services/messaging/keep-messages'
import { origin } from '#server/services/messaging/patient-link'
import { visitCalendar } from '#server/services/messaging/visit-calendar'
import { inZone } from '#shared/domain/messaging/quiet-hours'
import { planMessages } from '#shared/domain/messaging/reminder-plan'
import type { Occasion } from '#shared/domain/messaging/reminder-plan'
import { visitWords } from '#shared/domain/messaging/visit-words'
import { renderTemplate } from '#shared/domain/messaging/templates'
import type { TemplateValues } from '#shared/domain/messaging/templates'
import { languages } from '#shared/domain/messaging/vocabulary'
import type { ContactPreferences, Language, StoredKind } from '#shared/domain/messaging/vocabulary'

type Patient = typeof patients.$inferSelect
type Visit = typeof visits.$inferSelect
type Site = typeof sites.$inferSelect
type Pathway = typeof pathways.$inferSelect
type Escalation = typeof escalations.$inferSelect

function preferencesOf(patient: Patient): ContactPreferences {
  const allowed = patient.messageConsent === true && patient.diedOn === null
  return { preferred: patient.preferredChannel, hasMobile: allowed && Boolean(patient.phone), hasEmail: allowed && Boolean(patient.email), textsStopped: patient.textsStoppedAt !== null, wantsDropsReminders: patient.wantsDropsReminders }
}

function languageOf(patient: Patient): Language {
  return languages.find(each => each === patient.language) ?? 'en'
}

export interface PatientMessageInput {
  occasion: Occasion
  patient: Patient
  pathway: Pathway
  site: Site
  visit?: Visit
  subjectKey: string
  values: TemplateValues
  /** The moment that the message names: its date and time are written in the language of each message. */
  at?: Date
  now: Date
}

/** Why a person has to ring instead. */
function whyCall(patient: Patient): string {
  if (patient.messageConsent === null) return 'not yet asked about messages'
  if (!patient.messageConsent) return 'wants no messages'
  if (patient.textsStoppedAt) return 'stopped texts, no e-mail address'
  return patient.preferredChannel === 'call' ? 'prefers a call' : 'cannot be reached in time by message'
}

/**
 * Plans one occasion and writes its rows in the caller's transaction: nothing after a death, nothing for a closed pathway but the
 * answer to somebody who writes. A `call` is written as held, with its reason: the nurse's list shows it.
 */
export async function queuePatientMessages(tx: Transaction, input: PatientMessageInput): Promise<void> {
  const { patient, pathway, site, visit, now } = input
  if (patient.diedOn || (pathway.state === 'closed' && input.occasion.kind !== 'answer')) return
  const planned = planMessages({ occasion: input.occasion, siteZone: site.zone, preferences: preferencesOf(patient), now })
  const about = { recipientKey: `patient:${patient.id}`, subjectKey: input.subjectKey, patientId: patient.id, pathwayId: pathway.id, visitId: visit?.id ?? null, siteId: site.id, createdAt: now }
  const valuesIn = (language: Language): TemplateValues => ({ phone: site.phone, link: linkMark, ...input.values, ...(input.at ? visitWords(input.at, site.zone, language) : {}) })
  const rows = planned.map((message): NewMessage => {
    const when = { kind: message.kind, occasion: message.occasion, topic: message.topic, dueAt: message.dueAt, expiresAt: message.expiresAt }
    if (message.channel === 'call') {
      // A person reads it out: in English, and no link is needed.
      const rendered = renderTemplate({ kind: message.kind, channel: 'text', language: 'en', values: { ...valuesIn('en'), link: origin() } })
      return { ...about, ...when, channel: 'text', toAddress: patient.phone ?? '', body: rendered.text, state: 'held', lastError: whyCall(patient) }
    }
    const language = languageOf(patient)
    const rendered = renderTemplate({ kind: message.kind, channel: message.channel, language, values: valuesIn(language) })
    return {
      ...about, ...when, channel: message.channel, toAddress: (message.channel === 'text' ? patient.phone : patient.email) ?? '', subject: rendered.subject ?? '', body: rendered.text, language: rendered.language,
      calendar: visit && message.channel === 'email' && isAboutVisit(message.kind) ? visitCalendar({ visit, site, cancelled: message.kind === 'visit.cancelled', now }) : null,
    }
  })
  await keepMessages(tx, rows, now)
}

function isAboutVisit(kind: StoredKind): boolean {
  return kind === 'visit.changed' || kind === 'visit.cancelled' || kind === 'visit.reminder'
}

export interface VisitMessageInput { visit: Visit, patient: Patient, pathway: Pathway, site: Site, now: Date, change?: 'moved' | 'cancelled' }

/** Reminders of a visit, and the message that it was moved or cancelled. */
export async function queueVisitMessages(tx: Transaction, input: VisitMessageInput): Promise<void> {
  const { visit, site, now, change } = input
  const base = { patient: input.patient, pathway: input.pathway, site, visit, subjectKey: `visit:${visit.id}`, values: { place: site.name }, at: visit.startsAt, now }
  if (change) await queuePatientMessages(tx, { ...base, occasion: { kind: change === 'moved' ? 'visit-changed' : 'visit-cancelled', startsAt: visit.startsAt, version: visit.rowVersion } })
  if (change === 'cancelled') return
  await queuePatientMessages(tx, { ...base, occasion: { kind: 'visit', visitKind: visit.kind, startsAt: visit.startsAt } })
  const surgery = input.pathway.operatedAt
  if (visit.kind === 'day-one' && surgery) await queuePatientMessages(tx, { ...base, occasion: { kind: 'note-signed', surgeryDate: inZone(surgery, site.zone).toPlainDate().toString(), signedAt: surgery } })
}

export interface AlertInput { escalation: Escalation, person: Reachable, rung: number, now: Date }

/** Tells one member of staff by text and by e-mail, day and night: urgency and number, never a name or a finding. */
export async function queueAlert(tx: Transaction, { escalation, person, rung, now }: AlertInput): Promise<void> {
  const words = { 'now': 'Now', 'today': 'Today', 'this-week': 'This week' }[escalation.urgency]
  const planned = planMessages({ occasion: { kind: 'alert', rung: Math.max(0, rung - 1), urgency: escalation.urgency }, siteZone: 'UTC', now, preferences: { preferred: 'text', hasMobile: Boolean(person.phone), hasEmail: true, textsStopped: false, wantsDropsReminders: false } })
  await keepMessages(tx, planned.flatMap((message) => {
    if (message.channel === 'call') return []
    const rendered = renderTemplate({ kind: message.kind, channel: message.channel, language: 'en', values: { urgency: words, number: String(escalation.number), link: `${origin()}/escalations` } })
    return [{
      kind: message.kind, recipientKey: `person:${person.id}`, subjectKey: `escalation:${escalation.id}`, occasion: `${message.occasion} ${escalation.rowVersion}`, channel: message.channel, personId: person.id, escalationId: escalation.id, siteId: escalation.siteId,
      toAddress: (message.channel === 'text' ? person.phone : person.email) ?? '', subject: rendered.subject ?? '', body: rendered.text, language: 'en', dueAt: message.dueAt, expiresAt: message.expiresAt, createdAt: now,
    }]
  }), now)
}

export interface LetterInput { pathway: Pathway, site: Site, toEmail: string, link: string, version: number, now: Date }

/** Tells a referrer that a letter is ready: a link behind sign-in, no name and nothing clinical in the mail. */
export async function queueLetter(tx: Transaction, { pathway, site, toEmail, link, version, now }: LetterInput): Promise<void> {
  const planned = planMessages({ occasion: { kind: 'letter', version }, siteZone: site.zone, now, preferences: { preferred: 'email', hasMobile: false, hasEmail: true, textsStopped: false, wantsDropsReminders: false } })
  await keepMessages(tx, planned.flatMap((message) => {
    if (message.channel === 'call') return []
    const rendered = renderTemplate({ kind: message.kind, channel: 'email', language: 'en', values: { link, phone: site.phone } })
    return [{ kind: message.kind, recipientKey: `referrer:${toEmail}`, subjectKey: `pathway:${pathway.id}`, occasion: message.occasion, channel: 'email' as const, patientId: pathway.patientId, pathwayId: pathway.id, siteId: site.id, toAddress: toEmail, subject: rendered.subject ?? '', body: rendered.text, language: 'en', dueAt: message.dueAt, expiresAt: message.expiresAt, createdAt: now }]
  }), now)
}

export interface WithdrawInput { visitId?: string, pathwayId?: string, escalationId?: string, patientId?: string, kinds?: StoredKind[], why: string, now: Date }

/** Takes back what has not been sent. What is on its way or sent stays in the history. */
export async function withdrawMessages(tx: Transaction, input: WithdrawInput): Promise<void> {
  const which = [input.visitId && eq(messages.visitId, input.visitId), input.pathwayId && eq(messages.pathwayId, input.pathwayId), input.escalationId && eq(messages.escalationId, input.escalationId), input.patientId && eq(messages.patientId, input.patientId)].filter(each => typeof each === 'object')
  if (!which.length) return
  const withdrawn = await tx.update(messages).set({ state: 'withdrawn' }).where(and(...which, input.kinds ? inArray(messages.kind, input.kinds) : undefined, inArray(messages.state, ['queued', 'held']))).returning({ id: messages.id })
  if (withdrawn.length) await tx.insert(messageEvents).values(withdrawn.map(row => ({ messageId: row.id, at: input.now, kind: 'withdrawn', detail: { why: input.why } })))
}
