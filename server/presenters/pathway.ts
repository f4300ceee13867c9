import { may } from '#server/policies/pathway'
import { mayAnswer } from '#server/policies/escalation'
import { mayBook } from '#server/policies/visit'
import { presentBiometry, presentLensPlan } from '#server/presenters/biometry'
import { presentContacts } from '#server/presenters/patient'
import { presentReferral } from '#server/presenters/referral'
import { presentConsent, presentNote, presentRisk } from '#server/presenters/theatre'
import type { LoadedPathwayPage } from '#server/services/pathway/get-pathway'
import type { listChoices } from '#server/services/pathway/list-choices'
import type { listPathways } from '#server/services/pathway/list-pathways'
import { actionsFor } from '#shared/domain/pathway/decide'
import { nextStep, stageGroupOf } from '#shared/domain/pathway/next-step'
import type { SavedFilterQuery } from '#shared/contracts/pathway'
import type { Actor } from '#shared/domain/people/vocabulary'

const iso = (at: Date | null | undefined) => at?.toISOString() ?? null
type Listed = Awaited<ReturnType<typeof listPathways>>

export function presentPathways({ rows, counts }: Listed, pageSize: number, now: Date) {
  const last = rows.length === pageSize ? rows.at(-1)?.pathway : undefined
  return {
    now: now.toISOString(),
    counts: { all: counts.all, late: counts.late, escalated: counts.escalated },
    next: last ? `${last.surgeryAt?.toISOString() ?? 'none'}_${last.id}` : null,
    items: rows.map(presentThread),
  }
}
export type PathwayList = ReturnType<typeof presentPathways>
export type PathwayListItem = PathwayList['items'][number]

function presentThread(row: Listed['rows'][number]) {
  const { pathway, escalation, nextVisit, latest } = row
  const sentence = escalation?.reasons[0]?.sentence ?? ''
  const step = nextStep({ ...pathway, isLate: row.isLate, triageDecision: row.triageDecision, nextVisit: nextVisit ?? null, dayOneReviewed: pathway.dayOneAt !== null, escalation: escalation ? { urgency: escalation.urgency, sentence } : null })
  return {
    id: pathway.id, eye: pathway.eye, stage: pathway.stage, state: pathway.state, group: stageGroupOf(pathway), zone: row.zone, siteName: row.siteName, surgeonName: row.surgeonName, isLate: row.isLate,
    patient: { id: row.patient.id, name: row.patient.name, birthDate: row.patient.birthDate, phone: row.patient.phone },
    referredAt: pathway.referredAt.toISOString(), biometryAt: iso(pathway.biometryAt), surgeryAt: iso(pathway.surgeryAt), operatedAt: iso(pathway.operatedAt), dayOneAt: iso(pathway.dayOneAt), followUpAt: iso(pathway.followUpAt),
    nextStep: { words: step.words, at: iso(step.at), tone: step.tone },
    latest: latest ? { signedAt: latest.signedAt.toISOString(), findings: latest.findings } : null,
    escalation: escalation ? { urgency: escalation.urgency, state: escalation.state, raisedAt: escalation.raisedAt.toISOString(), answerBy: escalation.answerBy.toISOString(), sentence } : null,
  }
}

export function presentChoices({ sites, surgeons, practices }: Awaited<ReturnType<typeof listChoices>>, actor: Actor) {
  return { sites: sites.map(({ id, name, zone }) => ({ id, name, zone, canAddReferral: may(actor, 'addReferral', id) })), surgeons: surgeons.map(({ id, name }) => ({ id, name })), practices: practices.map(({ id, name }) => ({ id, name })) }
}
export type PathwayChoices = ReturnType<typeof presentChoices>

/** Where a pathway stands after an act: enough for the page to go on with. */
export function presentStanding(pathway: LoadedPathwayPage['pathway']) {
  return { id: pathway.id, stage: pathway.stage, state: pathway.state, holdReason: pathway.holdReason, lookAgainOn: pathway.lookAgainOn, closeReason: pathway.closeReason, rowVersion: pathway.rowVersion }
}

function abilitiesOf({ pathway, records, missing, goesTo }: LoadedPathwayPage, actor: Actor) {
  const offered = actionsFor(pathway)
  const can = (act: Parameters<typeof may>[1]) => may(actor, act, pathway.siteId)
  const open = pathway.state === 'open'
  const before = open && pathway.operatedAt === null
  return {
    canAdvance: offered.includes('advance') && can('advance') && goesTo !== null && missing.length === 0,
    canHold: offered.includes('hold') && can('hold'),
    canRelease: offered.includes('release') && can('release'),
    canClose: offered.includes('close') && can('close') && records.escalations.every(each => mayAnswer(actor, each)),
    canReopen: offered.includes('reopen') && can('reopen'),
    canShare: pathway.state !== 'closed' && can('share'),
    canTriage: open && pathway.stage === 'referral' && can('triage'),
    canChangeReferral: pathway.state !== 'closed' && can('changeReferral'),
    canMeasure: before && pathway.stage !== 'referral' && can('measure'),
    canSignLensPlan: before && pathway.stage !== 'referral' && can('signLensPlan'),
    canAssessRisk: before && pathway.stage !== 'referral' && can('assessRisk'),
    canSignConsent: before && pathway.stage !== 'referral' && can('signConsent'),
    canList: before && (pathway.stage === 'biometry' || pathway.stage === 'surgery') && can('runTheatre'),
    canSignNote: open && pathway.stage === 'surgery' && records.note === undefined && records.onList !== undefined && can('signNote'),
    canAmendNote: open && records.note !== undefined && can('signNote'),
    canDecideFirstCheck: open && pathway.operatedAt !== null && (pathway.stage === 'surgery' || pathway.stage === 'day-one') && can('decideFirstCheck'),
    canRecordFirstCheck: open && pathway.otherFirstCheck !== null && (pathway.stage === 'surgery' || pathway.stage === 'day-one') && can('recordFirstCheck'),
    canDecideFellowEye: open && can('decideFellowEye'),
    canSendLetter: open && (pathway.stage === 'follow-up' || pathway.stage === 'discharge') && can('sendLetter'),
    canBook: open && pathway.operatedAt !== null && mayBook(actor, pathway.siteId),
    canChangeContacts: can('changeContacts'),
  }
}

export function presentPathway(page: LoadedPathwayPage, actor: Actor, now: Date) {
  const { pathway, patient, site, records, fellow } = page
  return {
    now: now.toISOString(),
    ...presentStanding(pathway),
    eye: pathway.eye, priority: pathway.priority,
    referredAt: pathway.referredAt.toISOString(), biometryAt: iso(pathway.biometryAt), surgeryAt: iso(pathway.surgeryAt), operatedAt: iso(pathway.operatedAt), dayOneAt: iso(pathway.dayOneAt), followUpAt: iso(pathway.followUpAt), dischargedAt: iso(pathway.dischargedAt), stageSince: pathway.stageSince.toISOString(),
    patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, alerts: patient.alerts.map(({ kind, words }) => ({ kind, words })), messageConsent: patient.messageConsent, riskReasons: patient.riskReasons },
    contacts: presentContacts(patient),
    site: { id: site.id, name: site.name, zone: site.zone },
    surgeonName: page.surgeon?.name ?? null,
    practice: page.practice ? { id: page.practice.id, name: page.practice.name } : null,
    goesTo: page.goesTo,
    missing: page.missing.map(({ id, sentence }) => ({ id, sentence })),
    referral: records.referral ? presentReferral(records.referral) : null,
    biometry: records.biometry ? presentBiometry(records.biometry) : null,
    fellow: fellow ? { pathwayId: fellow.id, eye: fellow.eye, stage: fellow.stage, state: fellow.state, biometry: fellow.biometry ? presentBiometry(fellow.biometry) : null } : null,
    fellowResult: presentFellowResult(page.fellowResult),
    plans: page.plans.map(({ plan, signedByName }) => presentLensPlan(plan, signedByName)),
    risk: records.risk ? presentRisk(records.risk) : null,
    consent: records.consent ? presentConsent(records.consent) : null,
    listed: records.onList ? { caseId: records.onList.theatreCase.id, state: records.onList.theatreCase.state, position: records.onList.theatreCase.position, plannedMinutes: records.onList.theatreCase.plannedMinutes, room: records.onList.list.room, startsAt: records.onList.list.startsAt.toISOString() } : null,
    notes: page.notes.map(({ note, signedByName }) => presentNote(note, signedByName)),
    dayOneNeed: pathway.dayOneNeed ? presentNeed(pathway.dayOneNeed) : null,
    otherFirstCheck: pathway.otherFirstCheck, firstCheckFound: records.firstCheck?.words ?? null,
    fellowEyeDecision: pathway.fellowEyeDecision,
    letter: records.letter ? { state: records.letter.state, sentAt: iso(records.letter.sentAt) } : null,
    visits: records.visits.map(visit => ({ id: visit.id, kind: visit.kind, state: visit.state, startsAt: visit.startsAt.toISOString() })),
    reviews: records.reviews.map(({ review, kind }) => ({ visitId: review.visitId, kind, version: review.version, signedAt: review.signedAt.toISOString(), findings: review.findings })),
    escalations: records.escalations.map(each => ({ id: each.id, urgency: each.urgency, state: each.state, sentence: each.reasons[0]?.sentence ?? '' })),
    history: page.events.map(event => ({ id: event.id, at: event.at.toISOString(), words: event.words, personName: event.personName })),
    abilities: abilitiesOf(page, actor),
  }
}
export type PathwayPage = ReturnType<typeof presentPathway>

/** What the other eye reached, as a spherical equivalent, against what was predicted for it. */
function presentFellowResult(result: LoadedPathwayPage['fellowResult']) {
  const sphereD = result?.findings.refractionSphereD
  if (!result || sphereD === undefined) return null
  const weeks = result.operatedAt ? (result.signedAt.getTime() - result.operatedAt.getTime()) / (7 * 86_400_000) : null
  return { model: result.plan.model, predictedD: result.plan.predictedD, achievedD: sphereD + (result.findings.refractionCylinderD ?? 0) / 2, weeksAfterSurgery: weeks, signedAt: result.signedAt.toISOString() }
}

function presentNeed(need: Record<string, unknown>) {
  const reasons = Array.isArray(need.reasons) ? need.reasons as { sentence?: unknown, source?: unknown }[] : []
  return { inPerson: need.inPerson === true, latestSafeAt: typeof need.latestSafeAt === 'string' ? need.latestSafeAt : null, reasons: reasons.map(each => ({ sentence: String(each.sentence ?? ''), source: String(each.source ?? '') })), unknown: Array.isArray(need.unknown) ? need.unknown.map(String) : [] }
}

export function presentSavedFilters(rows: { id: string, name: string, query: SavedFilterQuery }[]) {
  return { items: rows.map(({ id, name, query }) => ({ id, name, query: { group: query.group, show: query.show, surgeonId: query.surgeonId, siteId: query.siteId } })) }
}
export type SavedFilters = ReturnType<typeof presentSavedFilters>
