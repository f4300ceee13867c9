import { mayBook } from '#server/policies/visit'
import type { listPathways } from '#server/services/pathway/list-pathways'
import type { getPatient } from '#server/services/patient/get-patient'
import type { Actor } from '#shared/domain/people/vocabulary'

const iso = (at: Date | null) => at?.toISOString() ?? null

export function presentPatient({ patient, eyes, visits, reviews, escalations }: Awaited<ReturnType<typeof getPatient>>, actor: Actor, now: Date) {
  return {
    now: now.toISOString(),
    patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, phone: patient.phone, email: patient.email, language: patient.language, preferredChannel: patient.preferredChannel, textsStopped: patient.textsStoppedAt !== null, alerts: patient.alerts },
    eyes: eyes.map(({ pathway, siteName, zone }) => ({
      id: pathway.id, eye: pathway.eye, stage: pathway.stage, state: pathway.state, siteName, zone, referredAt: pathway.referredAt.toISOString(), operatedAt: iso(pathway.operatedAt), surgeryAt: iso(pathway.surgeryAt),
      visits: visits.filter(visit => visit.pathwayId === pathway.id).map(visit => ({ id: visit.id, kind: visit.kind, state: visit.state, startsAt: visit.startsAt.toISOString() })),
      reviews: reviews.filter(review => review.pathwayId === pathway.id).map(review => ({ visitId: review.visitId, version: review.version, signedAt: review.signedAt.toISOString(), findings: review.findings })),
      escalations: escalations.filter(each => each.pathwayId === pathway.id).map(each => ({ id: each.id, urgency: each.urgency, state: each.state, sentence: each.reasons[0]?.sentence ?? '' })),
      abilities: { canBook: mayBook(actor, pathway.siteId) && pathway.state === 'open' && pathway.operatedAt !== null },
    })),
  }
}
export type PatientPage = ReturnType<typeof presentPatient>

export function presentPathways(rows: Awaited<ReturnType<typeof listPathways>>, pageSize: number, now: Date) {
  const last = rows.length === pageSize ? rows.at(-1)?.pathway : undefined
  return {
    now: now.toISOString(),
    next: last ? `${last.surgeryAt?.toISOString() ?? 'none'}_${last.id}` : null,
    items: rows.map(({ pathway, patient, zone, escalation }) => ({
      id: pathway.id, eye: pathway.eye, stage: pathway.stage, zone, patient,
      referredAt: pathway.referredAt.toISOString(), biometryAt: iso(pathway.biometryAt), surgeryAt: iso(pathway.surgeryAt), operatedAt: iso(pathway.operatedAt), dayOneAt: iso(pathway.dayOneAt), followUpAt: iso(pathway.followUpAt),
      escalation: escalation ? { urgency: escalation.urgency, state: escalation.state, raisedAt: escalation.raisedAt.toISOString(), sentence: escalation.reasons[0]?.sentence ?? '' } : null,
    })),
  }
}
export type PathwayList = ReturnType<typeof presentPathways>
