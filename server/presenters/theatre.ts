import type { consents, operationNotes, riskAssessments, theatreCases, theatreLists } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import type { getTheatreDay } from '#server/services/theatre/get-theatre-day'
import type { Actor } from '#shared/domain/people/vocabulary'
import type { RiskAssessment } from '#shared/domain/theatre/vocabulary'

/** A risk that was worked out here has a probability; one entered with older records has none. */
export function presentRisk(row: typeof riskAssessments.$inferSelect) {
  const result = row.result as Partial<RiskAssessment>
  return {
    id: row.id, version: row.version, assessedAt: row.assessedAt.toISOString(), factors: row.factors,
    result: typeof result.probability === 'number'
      ? { probability: result.probability, interval: result.interval ?? null, difficulty: result.difficulty ?? 'routine', timeFactor: result.timeFactor ?? 1, minimumGrade: result.minimumGrade ?? 'any-supervised', hazards: (result.hazards ?? []).map(({ id, label }) => ({ id, label })), equipment: result.equipment ?? [], preparation: result.preparation ?? [], missing: (result.missing ?? []).map(({ label, countedAs }) => ({ label, countedAs })), shares: (result.shares ?? []).map(({ label, oddsRatio, known, probabilityAfter }) => ({ label, oddsRatio, known, probabilityAfter })), notes: result.notes ?? [], source: result.source ?? null }
      : null,
  }
}
export type RiskView = ReturnType<typeof presentRisk>

export function presentConsent(row: typeof consents.$inferSelect) {
  return { id: row.id, version: row.version, discussed: row.discussed, riskFigurePercent: row.riskFigurePercent, signedAt: row.signedAt.toISOString(), amendReason: row.amendReason }
}

export function presentNote(row: typeof operationNotes.$inferSelect, signedByName: string) {
  return {
    id: row.id, version: row.version, operatedAt: row.operatedAt.toISOString(), anaesthesia: row.anaesthesia, incision: row.incision, woundClockHour: row.woundClockHour, capsulorhexisMm: row.capsulorhexisMm, technique: row.technique, viscoelastics: row.viscoelastics,
    energyPercentSeconds: row.energyPercentSeconds, ultrasoundSeconds: row.ultrasoundSeconds, nuclearDensity: row.nuclearDensity, complications: row.complications, complicationWords: row.complicationWords, lensModel: row.lensModel, lensPowerD: row.lensPowerD,
    lensAsPlanned: row.lensAsPlanned, lensDeviationExplained: row.lensDeviationExplained, drops: row.drops.map(({ drug, perDay, days }) => ({ drug, perDay, days })), signedByName, signedAt: row.signedAt.toISOString(), amendReason: row.amendReason,
  }
}
export type NoteView = ReturnType<typeof presentNote>

export function presentList(row: typeof theatreLists.$inferSelect) {
  return { id: row.id, siteId: row.siteId, surgeonId: row.surgeonId, room: row.room, startsAt: row.startsAt.toISOString(), endsAt: row.endsAt.toISOString() }
}
export function presentCase(row: typeof theatreCases.$inferSelect) {
  return { id: row.id, listId: row.listId, pathwayId: row.pathwayId, position: row.position, plannedMinutes: row.plannedMinutes, state: row.state }
}

export function presentTheatreDay(day: Awaited<ReturnType<typeof getTheatreDay>>, actor: Actor, now: Date) {
  const canRun = may(actor, 'runTheatre', day.site.id)
  return {
    now: now.toISOString(), date: day.date, site: { id: day.site.id, name: day.site.name, zone: day.site.zone },
    lists: day.lists.map(({ list, surgeonName, cases, forecast }) => ({
      ...presentList(list), surgeonName, isOver: list.endsAt <= now,
      forecast: forecast ? { expectedFinishMinute: forecast.expectedFinishMinute, slowFinishMinute: forecast.slowFinishMinute, overrunProbability: forecast.overrunProbability } : null,
      cases: cases.map(({ theatreCase, pathway, patient, risk, plan }) => ({
        ...presentCase(theatreCase), eye: pathway.eye, stage: pathway.stage, startsAt: pathway.surgeryAt?.toISOString() ?? null,
        patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, alerts: patient.alerts.map(alert => alert.words) },
        lens: plan ? { model: plan.model, powerD: plan.powerD } : null,
        hazards: ((risk?.result.hazards ?? []) as { label: string }[]).map(hazard => hazard.label),
        equipment: (risk?.result.equipment ?? []) as string[],
        abilities: { canCancel: canRun && theatreCase.state === 'planned' },
      })),
    })),
    waiting: day.waiting.map(row => ({ id: row.id, eye: row.eye, stage: row.stage, priority: row.priority, patient: { id: row.patient.id, name: row.patient.name, birthDate: row.patient.birthDate } })),
    abilities: { canAddList: canRun, canAddCase: canRun },
  }
}
export type TheatreDay = ReturnType<typeof presentTheatreDay>
