import type { consents, operationNotes, riskAssessments, theatreCases, theatreLists } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { mayLockList, mayPrintList } from '#server/policies/theatre'
import type { getList } from '#server/services/theatre/get-list'
import type { getTheatreDay, LoadedList } from '#server/services/theatre/get-theatre-day'
import type { Actor } from '#shared/domain/people/vocabulary'
import { forecastDay } from '#shared/domain/theatre/day-plan'
import { notBeforeMinute } from '#shared/domain/theatre/list-breaches'
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
  return { id: row.id, siteId: row.siteId, surgeonId: row.surgeonId, room: row.room, startsAt: row.startsAt.toISOString(), endsAt: row.endsAt.toISOString(), rowVersion: row.rowVersion, lockedAt: row.lockedAt?.toISOString() ?? null }
}
export function presentCase(row: typeof theatreCases.$inferSelect) {
  return { id: row.id, listId: row.listId, pathwayId: row.pathwayId, position: row.position, plannedMinutes: row.plannedMinutes, state: row.state }
}

/** One case of a list, as the page draws it and the printed list reads it. */
function presentDayCase({ theatreCase, pathway, patient, risk, plan, duration, predicted }: LoadedList['cases'][number]) {
  return {
    ...presentCase(theatreCase), eye: pathway.eye, stage: pathway.stage, surgeryAt: pathway.surgeryAt?.toISOString() ?? null,
    startedAt: theatreCase.startedAt?.toISOString() ?? null, endedAt: theatreCase.endedAt?.toISOString() ?? null, minutesByHand: theatreCase.minutesByHand, constraints: theatreCase.constraints,
    duration: { logMedian: duration.logMedian, logSpread: duration.logSpread }, predictedMinutes: Math.round(predicted.medianMinutes), ownCases: predicted.ownCases,
    patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, alerts: patient.alerts.map(alert => alert.words), interpreterLanguage: patient.interpreterLanguage },
    lens: plan ? { model: plan.model, powerD: plan.powerD, signedAt: plan.signedAt.toISOString() } : null,
    difficulty: typeof risk?.result.difficulty === 'string' ? risk.result.difficulty : null,
    hazards: ((risk?.result.hazards ?? []) as { label: string }[]).map(hazard => hazard.label),
    equipment: (risk?.result.equipment ?? []) as string[],
  }
}

export function presentDayList({ list, surgeonName, lockedByName, zone, ownCases, changes, cases }: LoadedList, actor: Actor, now: Date) {
  const canRun = may(actor, 'runTheatre', list.siteId)
  const isOver = list.endsAt <= now
  const view = {
    ...presentList(list), surgeonName, isOver, ownCases,
    lockedByName, anaesthetistFrom: list.anaesthetistFrom?.toISOString() ?? null, anaesthetistTo: list.anaesthetistTo?.toISOString() ?? null,
    changesSinceLock: changes.map(({ change, by }) => ({ id: change.id, at: change.at.toISOString(), by, kind: change.kind, words: change.words, reason: change.reason })),
    cases: cases.map(row => ({ ...presentDayCase(row), notBeforeMinute: notBeforeMinute({ startsAt: list.startsAt.toISOString(), zone, anaesthetistFrom: list.anaesthetistFrom?.toISOString() ?? null }, row.theatreCase.constraints), abilities: { canCancel: canRun && row.theatreCase.state === 'planned', canChange: canRun && row.theatreCase.state === 'planned' && !isOver, canCheck: may(actor, 'checkSafety', list.siteId) } })),
  }
  const forecast = isOver ? null : forecastDay(view, now.toISOString())
  return {
    ...view,
    forecast: forecast ? { expectedFinishMinute: forecast.expectedFinishMinute, slowFinishMinute: forecast.slowFinishMinute, overrunProbability: forecast.overrunProbability } : null,
    abilities: { canOrder: canRun && !isOver, canAddCase: canRun && !isOver, canLock: mayLockList(actor, list), canPrint: mayPrintList(actor, list.siteId), canChange: canRun && !isOver },
  }
}
export type DayListView = ReturnType<typeof presentDayList>
export type DayCaseView = DayListView['cases'][number]

export function presentTheatreDay(day: Awaited<ReturnType<typeof getTheatreDay>>, actor: Actor, now: Date) {
  const canRun = may(actor, 'runTheatre', day.site.id)
  return {
    now: now.toISOString(), date: day.date, site: { id: day.site.id, name: day.site.name, zone: day.site.zone },
    lists: day.lists.map(list => presentDayList(list, actor, now)),
    waiting: day.waiting.map(row => ({ id: row.id, eye: row.eye, stage: row.stage, priority: row.priority, referredAt: row.referredAt.toISOString(), riskAssessed: row.riskAssessed, minutes: row.minutes, patient: { id: row.patient.id, name: row.patient.name, birthDate: row.patient.birthDate } })),
    surgeons: canRun ? day.surgeons.map(({ id, name }) => ({ id, name })) : [],
    abilities: { canAddList: canRun, canAddCase: canRun },
  }
}
export type TheatreDay = ReturnType<typeof presentTheatreDay>

/** One list as it goes on paper. */
export function presentPrintedList({ found, site }: Awaited<ReturnType<typeof getList>>, actor: Actor, now: Date) {
  return { ...presentDayList(found, actor, now), siteName: site.name, zone: site.zone, printedAt: now.toISOString(), printedBy: actor.name }
}
export type PrintedListView = ReturnType<typeof presentPrintedList>
