import { mayBook, mayRunClinic, mayRunSessions, maySendIn } from '#server/policies/visit'
import { presentNeed } from '#server/presenters/booking'
import type { getClinicDay } from '#server/services/visit/get-clinic-day'
import type { listOpenPlaces } from '#server/services/visit/list-open-places'
import type { listToBook } from '#server/services/visit/list-to-book'
import type { visits } from '#server/db/schema/index'
import type { Actor } from '#shared/domain/people/vocabulary'

type Row<T extends (...given: never[]) => Promise<unknown>> = Awaited<ReturnType<T>>

export function presentVisit(visit: typeof visits.$inferSelect) {
  return { id: visit.id, pathwayId: visit.pathwayId, patientId: visit.patientId, siteId: visit.siteId, placeId: visit.placeId, kind: visit.kind, state: visit.state, startsAt: visit.startsAt.toISOString(), rowVersion: visit.rowVersion }
}

export function presentClinicDay(day: Row<typeof getClinicDay>, actor: Actor) {
  const siteId = day.site.id
  return {
    site: { id: day.site.id, name: day.site.name, zone: day.site.zone, phone: day.site.phone, isHospital: day.site.isHospital },
    sites: day.sites.filter(each => actor.roles.some(role => role.siteId === each.id)),
    date: day.date,
    abilities: { canRunClinic: mayRunClinic(actor, siteId), canSendIn: maySendIn(actor, siteId), canBook: mayBook(actor, siteId), canRunSessions: mayRunSessions(actor, siteId), canReview: actor.roles.some(role => ['optometrist', 'surgeon', 'clinical-lead'].includes(role.role)) },
    visits: day.visits.map((row) => {
      const signed = day.signed.find(each => each.visitId === row.visit.id)
      const escalation = day.escalations.find(each => each.pathwayId === row.pathway.id)
      return {
        ...presentVisit(row.visit),
        eye: row.pathway.eye,
        operatedAt: row.pathway.operatedAt?.toISOString() ?? null,
        patient: { id: row.patient.id, name: row.patient.name, birthDate: row.patient.birthDate, recordNumber: row.patient.recordNumber, phone: row.patient.phone, carer: row.patient.carer },
        toKnow: toKnow(row),
        need: row.visit.kind === 'day-one' ? presentNeed(row.pathway.dayOneNeed) : null,
        confirmedAt: row.visit.confirmedAt?.toISOString() ?? null,
        cannotComeAt: row.visit.cannotComeAt?.toISOString() ?? null,
        arrivedAt: row.visit.arrivedAt?.toISOString() ?? null,
        sentInAt: row.visit.sentInAt?.toISOString() ?? null,
        missingAt: row.visit.missingAt?.toISOString() ?? null,
        optometristName: row.optometrist,
        signedAt: signed?.signedAt.toISOString() ?? null,
        signedBy: signed?.signedBy ?? null,
        escalation: escalation ? { id: escalation.id, urgency: escalation.urgency, state: escalation.state, sentence: escalation.reasons[0]?.sentence ?? '' } : null,
        steps: day.steps.filter(step => step.visitId === row.visit.id).map(step => ({ step: step.step, outcome: step.outcome, at: step.at.toISOString() })),
      }
    }),
    places: day.places.map(place => ({ id: place.id, sessionId: place.sessionId, kind: place.kind, room: place.room, startsAt: place.startsAt.toISOString(), minutes: place.minutes, closed: place.closedAt !== null, visitId: place.visitId })),
    sessions: day.sessions.map(session => ({ id: session.id, kind: session.kind, room: session.room, startsAt: session.startsAt.toISOString(), endsAt: session.endsAt.toISOString(), closed: session.closedAt !== null, rowVersion: session.rowVersion })),
    texts: day.texts.map(text => ({ id: text.id, patientId: text.patientId, patientName: text.patientName, body: text.body, meaning: text.meaning, receivedAt: text.receivedAt.toISOString(), handled: text.handledAt !== null })),
  }
}
export type ClinicDay = ReturnType<typeof presentClinicDay>

function toKnow(row: Row<typeof getClinicDay>['visits'][number]): string {
  const lines = row.patient.alerts.map(alert => alert.words)
  if (row.patient.needsTransport) lines.push('Transport booked by the unit.')
  if (row.patient.interpreterLanguage) lines.push(`Interpreter: ${row.patient.interpreterLanguage}.`)
  if (row.visit.note) lines.push(row.visit.note)
  return lines.join(' ')
}

export function presentToBook(rows: Row<typeof listToBook>) {
  return { items: rows.map(row => ({ id: row.id, eye: row.eye, operatedAt: row.operatedAt?.toISOString() ?? null, need: row.dayOneNeed, siteId: row.siteId, siteName: row.siteName, zone: row.zone, patient: { id: row.patient.id, name: row.patient.name, birthDate: row.patient.birthDate, phone: row.patient.phone, needsTransport: row.patient.needsTransport, interpreterLanguage: row.patient.interpreterLanguage, alerts: row.patient.alerts.map(alert => alert.words) } })) }
}
export type ToBook = ReturnType<typeof presentToBook>

export function presentOpenPlaces(rows: Row<typeof listOpenPlaces>) {
  return { items: rows.map(row => ({ id: row.id, startsAt: row.startsAt.toISOString(), minutes: row.minutes, sessionId: row.sessionId, room: row.room, siteId: row.siteId, siteName: row.siteName, isHospital: row.isHospital, zone: row.zone })) }
}
export type OpenPlaces = ReturnType<typeof presentOpenPlaces>
