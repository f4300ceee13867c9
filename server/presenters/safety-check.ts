import { may } from '#server/policies/pathway'
import type { getSafetyCheck } from '#server/services/theatre/get-safety-check'
import type { Actor } from '#shared/domain/people/vocabulary'
import { questionsOf, safetyStepLabels, safetySteps } from '#shared/domain/theatre/safety-check'

/** The check of one case with what is expected of every answer, for the screen in the room. */
export function presentSafetyCheck(found: Awaited<ReturnType<typeof getSafetyCheck>>, actor: Actor, now: Date) {
  const { theatreCase, list, record, plan, consent, risk, check, nameOf } = found
  const { pathway, patient, site } = record
  const isLive = theatreCase.state === 'planned' || theatreCase.state === 'in-theatre'
  const isReady = isLive && pathway.state === 'open' && pathway.stage === 'surgery'
  const name = (id: string) => nameOf.get(id) ?? 'somebody'
  const [scan] = check.scans
  return {
    now: now.toISOString(), zone: site.zone, caseId: theatreCase.id, pathwayId: pathway.id, state: theatreCase.state, startedAt: theatreCase.startedAt?.toISOString() ?? null, endedAt: theatreCase.endedAt?.toISOString() ?? null,
    room: list.room, surgeonName: found.surgeonName, listDay: list.startsAt.toISOString(), place: found.place, of: found.of, eye: pathway.eye,
    patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, alerts: patient.alerts.map(({ kind, words }) => ({ kind, words })), interpreterLanguage: patient.interpreterLanguage },
    plan: plan ? { model: plan.model, powerD: plan.powerD, targetD: plan.targetD, signedByName: name(plan.signedBy), signedAt: plan.signedAt.toISOString() } : null,
    consent: consent ? { signedByName: name(consent.signedBy), signedAt: consent.signedAt.toISOString() } : null,
    hazards: ((risk?.result.hazards ?? []) as { label: string }[]).map(hazard => hazard.label),
    equipment: (risk?.result.equipment ?? []) as string[],
    steps: safetySteps.map((step) => {
      const signed = check.steps.find(each => each.step === step)
      return { step, label: safetyStepLabels[step], questions: questionsOf(step).map(({ id, asked, agrees, differs }) => ({ id, asked, agrees, differs })), answers: signed?.answers ?? null, signedByName: signed ? name(signed.signedBy) : null, signedAt: signed?.signedAt.toISOString() ?? null }
    }),
    lens: scan ? { id: scan.id, source: scan.source, gtin: scan.gtin, lot: scan.lot, serial: scan.serial, expiresOn: scan.expiresOn, model: scan.model, powerD: scan.powerD, plannedModel: scan.plannedModel, plannedPowerD: scan.plannedPowerD, reasons: scan.reasons, scannedByName: name(scan.scannedBy), scannedAt: scan.scannedAt.toISOString() } : null,
    stops: check.stops.map(({ stop, explanation }) => ({
      id: stop.id, step: stop.step, scanId: stop.scanId, reasons: stop.reasons, raisedByName: name(stop.raisedBy), raisedAt: stop.raisedAt.toISOString(), isOpen: check.open.some(each => each.id === stop.id),
      explanation: explanation ? { words: explanation.words, signedByName: name(explanation.signedBy), signedAt: explanation.signedAt.toISOString() } : null,
    })),
    notReady: isReady ? null : theatreCase.state === 'done' ? 'This case is done.' : theatreCase.state === 'cancelled' ? 'This case was taken off its list.' : pathway.state !== 'open' ? 'This pathway is closed or on hold.' : 'This eye is not ready for surgery yet: see its pathway for what is missing.',
    abilities: { canSign: isReady && may(actor, 'checkSafety', list.siteId), canExplain: isReady && may(actor, 'explainStop', list.siteId) },
  }
}
export type SafetyCheckView = ReturnType<typeof presentSafetyCheck>
