import { may } from '#server/policies/pathway'
import { mayBook } from '#server/policies/visit'
import type { getPatient } from '#server/services/patient/get-patient'
import type { Actor } from '#shared/domain/people/vocabulary'

const iso = (at: Date | null) => at?.toISOString() ?? null
type Loaded = Awaited<ReturnType<typeof getPatient>>

export function presentContacts(patient: Loaded['patient']) {
  return {
    id: patient.id, phone: patient.phone, email: patient.email, address: patient.address, language: patient.language, preferredChannel: patient.preferredChannel, messageConsent: patient.messageConsent, wantsDetail: patient.wantsDetail,
    wantsDropsReminders: patient.wantsDropsReminders, needsTransport: patient.needsTransport, interpreterLanguage: patient.interpreterLanguage, carer: patient.carer, numberConfirmedAt: iso(patient.numberConfirmedAt), textsStopped: patient.textsStoppedAt !== null, rowVersion: patient.rowVersion,
  }
}

export type PatientContacts = ReturnType<typeof presentContacts>

export function presentPatient(page: Loaded, actor: Actor, now: Date) {
  const { patient, eyes } = page
  return {
    now: now.toISOString(),
    patient: { ...presentContacts(patient), name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, diedOn: patient.diedOn, alerts: patient.alerts.map(({ kind, words }) => ({ kind, words })) },
    eyes: eyes.map(each => presentEye(each, page, actor)),
    history: page.events.map(event => ({ id: event.id, eye: eyes.find(each => each.pathway.id === event.pathwayId)?.pathway.eye ?? 'right', zone: eyes.find(each => each.pathway.id === event.pathwayId)?.zone ?? 'Europe/London', at: event.at.toISOString(), words: event.words, personName: event.personName })),
    messages: { waiting: page.messages.waiting, toRing: page.messages.toRing, failed: page.messages.failed, sent: page.messages.sent },
    abilities: { canChangeContacts: eyes.some(each => may(actor, 'changeContacts', each.pathway.siteId)), canAddPathway: eyes.some(each => may(actor, 'addReferral', each.pathway.siteId)) && patient.diedOn === null },
  }
}
export type PatientPage = ReturnType<typeof presentPatient>

function presentEye({ pathway, siteName, zone }: Loaded['eyes'][number], page: Loaded, actor: Actor) {
  const of = <T extends { pathwayId: string }>(rows: T[]) => rows.filter(row => row.pathwayId === pathway.id)
  const [biometry] = of(page.biometries)
  const [plan] = of(page.plans)
  const [note] = of(page.notes)
  return {
    id: pathway.id, eye: pathway.eye, stage: pathway.stage, state: pathway.state, siteName, zone, referredAt: pathway.referredAt.toISOString(), biometryAt: iso(pathway.biometryAt), surgeryAt: iso(pathway.surgeryAt), operatedAt: iso(pathway.operatedAt), dayOneAt: iso(pathway.dayOneAt), followUpAt: iso(pathway.followUpAt), dischargedAt: iso(pathway.dischargedAt),
    visits: of(page.visits).map(visit => ({ id: visit.id, kind: visit.kind, state: visit.state, startsAt: visit.startsAt.toISOString() })),
    reviews: page.reviews.filter(row => row.review.pathwayId === pathway.id).map(({ review, kind, signedByName }) => ({ visitId: review.visitId, version: review.version, kind, signedAt: review.signedAt.toISOString(), signedByName, findings: review.findings })),
    escalations: of(page.escalations).map(each => ({ id: each.id, urgency: each.urgency, state: each.state, raisedAt: each.raisedAt.toISOString(), answerBy: each.answerBy.toISOString(), sentence: each.reasons[0]?.sentence ?? '' })),
    biometry: biometry ? { axialLengthMm: biometry.axialLengthMm, measuredAt: biometry.measuredAt.toISOString(), accepted: biometry.acceptedAt !== null, acuityEntered: biometry.preoperativeAcuityEntered, iopMmHg: biometry.preoperativeIopMmHg } : null,
    plan: plan ? { model: plan.model, powerD: plan.powerD, targetD: plan.targetD } : null,
    note: note ? { lensModel: note.lensModel, lensPowerD: note.lensPowerD, woundClockHour: note.woundClockHour } : null,
    abilities: { canBook: mayBook(actor, pathway.siteId) && pathway.state === 'open' && pathway.operatedAt !== null },
  }
}
export type PatientEye = PatientPage['eyes'][number]
