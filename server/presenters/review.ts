import { mayReview } from '#server/policies/review'
import { mayRaise } from '#server/policies/escalation'
import type { getReview } from '#server/services/review/get-review'
import type { Actor } from '#shared/domain/people/vocabulary'

export function presentReviewSheet(sheet: Awaited<ReturnType<typeof getReview>>, actor: Actor) {
  const signed = sheet.signed.map(({ review, signedByName }) => ({ id: review.id, version: review.version, findings: review.findings, reasons: review.reasons, unchecked: review.unchecked, signedBy: signedByName, signedAt: review.signedAt.toISOString(), amendReason: review.amendReason, rulesVersion: review.rulesVersion }))
  const may = mayReview(actor, sheet.pathway)
  return {
    now: sheet.now.toISOString(),
    visit: { id: sheet.visit.id, kind: sheet.visit.kind, state: sheet.visit.state, startsAt: sheet.visit.startsAt.toISOString(), rowVersion: sheet.visit.rowVersion },
    patient: { id: sheet.patient.id, name: sheet.patient.name, birthDate: sheet.patient.birthDate, recordNumber: sheet.patient.recordNumber, phone: sheet.patient.phone, alerts: sheet.patient.alerts },
    pathway: { id: sheet.pathway.id, eye: sheet.pathway.eye, stage: sheet.pathway.stage, operatedAt: sheet.pathway.operatedAt?.toISOString() ?? null },
    site: { id: sheet.site.id, name: sheet.site.name, zone: sheet.site.zone, phone: sheet.site.phone },
    context: sheet.context,
    before: { acuityEntered: sheet.biometry?.preoperativeAcuityEntered ?? null, iopMmHg: sheet.biometry?.preoperativeIopMmHg ?? null },
    operation: sheet.note ? { operatedAt: sheet.note.operatedAt.toISOString(), lensModel: sheet.note.lensModel, lensPowerD: sheet.note.lensPowerD, targetD: sheet.plan?.targetD ?? null, complications: sheet.note.complications, energyPercentSeconds: sheet.note.energyPercentSeconds, nuclearDensity: sheet.note.nuclearDensity, woundClockHour: sheet.note.woundClockHour } : null,
    previous: sheet.previous ? { signedAt: sheet.previous.signedAt.toISOString(), findings: sheet.previous.findings } : null,
    draft: sheet.draft ? { findings: sheet.draft.draft.findings, rowVersion: sheet.draft.draft.rowVersion, savedAt: sheet.draft.draft.savedAt.toISOString(), personName: sheet.draft.personName, isMine: sheet.draft.draft.personId === actor.personId } : null,
    signed,
    rungs: sheet.rungs,
    abilities: { canSign: may && signed.length === 0, canAmend: may && signed.length > 0, canRaise: mayRaise(actor, sheet.pathway) },
  }
}
export type ReviewSheet = ReturnType<typeof presentReviewSheet>
