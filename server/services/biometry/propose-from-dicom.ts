import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { unreadable } from '#server/services/biometry/dicom-elements'
import type { DicomEye } from '#server/services/biometry/dicom-elements'
import { readDicom } from '#server/services/biometry/read-dicom'
import type { ServiceContext } from '#server/services/context'
import { loadPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { biometryProblems } from '#shared/domain/biometry/limits'
import { DomainError } from '#shared/domain/errors'
import { differences } from '#shared/domain/patient/same-person'
import { eyeLabel, otherEye } from '#shared/domain/pathway/vocabulary'
import type { Eye } from '#shared/domain/pathway/vocabulary'

/**
 * What a device's file says about this eye, for the biometry form: a proposal that a person looks at and saves, or a refusal. Another
 * person's file is refused with both people shown, so that whoever mixed them up sees it. Nothing is stored but that it was read.
 */
export async function proposeFromDicom(ctx: ServiceContext, { pathwayId, bytes }: { pathwayId: string, bytes: Uint8Array }) {
  const { pathway, patient } = await loadPathway(ctx.db, ctx.actor, pathwayId)
  if (!may(ctx.actor, 'measure', pathway.siteId)) throw new DomainError('pathway.not-allowed', 'A nurse, optometrist or surgeon of this site records biometry.')
  requireOpen(pathway)
  if (pathway.operatedAt) throw new DomainError('biometry.conflict', 'This eye is operated: its biometry is closed.')
  const file = readDicom(bytes)
  const differ = differences({ name: patient.name, birthDate: patient.birthDate, identifiers: [patient.recordNumber, ...patient.identifier ? [patient.identifier] : []] }, file.patient)
  if (differ.length) {
    throw new DomainError('biometry.other-patient', 'This file is of somebody else, or does not name this patient in full.', {
      fields: differ.map(each => ({ field: `file.${each}`, code: 'other-patient', message: `${{ name: 'The name', birthDate: 'The birth date', identifier: 'The identifier' }[each]} of the file is another, or is missing.` })),
      detail: { file: { name: nameWords(file.patient.name), birthDate: file.patient.birthDate, identifier: file.patient.identifier }, patient: { name: patient.name, birthDate: patient.birthDate, identifier: patient.identifier ?? patient.recordNumber } },
    })
  }
  const own = file.eyes[pathway.eye]
  if (!own) throw new DomainError('biometry.other-eye', `This file holds the ${otherEye(pathway.eye)} eye only. This pathway is of the ${pathway.eye} eye.`, { fields: [{ field: 'file', code: 'laterality', message: `${eyeLabel(pathway.eye)} is not in the file.` }], detail: { file: { eye: otherEye(pathway.eye) }, pathway: { eye: pathway.eye } } })
  const fellow = file.eyes[otherEye(pathway.eye)]
  requireBelievable(pathway.eye, own)
  if (fellow) requireBelievable(otherEye(pathway.eye), fellow)
  await appendAudit(ctx.db, { at: ctx.now, event: 'biometry.dicom-read', personId: ctx.actor.personId, subjectKind: 'pathway', subjectId: pathway.id, siteId: pathway.siteId, payload: { kind: file.kind } })
  return { eye: pathway.eye, kind: file.kind, measuredOn: file.measuredOn, values: own.values, notes: own.notes, fellow: fellow ? { values: fellow.values, notes: fellow.notes } : null }
}

/** What nobody's eye has is refused here and not offered to be saved. Only what the file holds is looked at. */
function requireBelievable(eye: Eye, { values }: DicomEye): void {
  const whole = { axialLengthMm: 23.5, k1D: 43, k1AxisDegrees: 0, k2D: 44, k2AxisDegrees: 90, ...values, eye }
  const [problem] = biometryProblems(whole)
  if (problem) throw unreadable(`${eyeLabel(eye)}: ${problem.message}`, problem.code)
}

const nameWords = (name: string) => name.split('=')[0]?.split('^').filter(Boolean).join(', ').slice(0, 120) ?? ''
