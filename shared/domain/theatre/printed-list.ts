import { eyeLabel } from '#shared/domain/pathway/vocabulary'
import type { Eye } from '#shared/domain/pathway/vocabulary'
import type { CaseConstraints } from '#shared/domain/theatre/list-constraints'

export interface PrintedCase {
  eye: Eye
  patient: { alerts: readonly string[], interpreterLanguage: string | null }
  lens: { model: string, powerD: number } | null
  hazards: readonly string[]
  equipment: readonly string[]
  constraints: CaseConstraints
}

/** What stands in each column of a printed list: the eye in words, the lens with its model and its power, and what the room must know. */
export function printedCase({ eye, patient, lens, hazards, equipment, constraints }: PrintedCase) {
  const needs = [
    constraints.latexAllergy ? 'Latex allergy' : '', constraints.diabetic ? 'Diabetes' : '', constraints.needsAnaesthetist ? 'Anaesthetist' : '',
    constraints.interpreterFrom || constraints.interpreterTo ? `Interpreter ${constraints.interpreterFrom ?? ''} to ${constraints.interpreterTo ?? ''}`.trim() : patient.interpreterLanguage ? `Interpreter: ${patient.interpreterLanguage}` : '',
    constraints.lensAvailable === false ? 'Lens not on the shelf' : '',
  ].filter(Boolean)
  return {
    eye: eyeLabel(eye),
    lensModel: lens?.model ?? 'No lens plan',
    lensPower: lens ? `${lens.powerD < 0 ? '−' : '+'}${Math.abs(lens.powerD).toFixed(1)} D` : '',
    know: [...patient.alerts.map(words => words.replace(/\.$/, '')), ...needs, ...hazards].join('. '),
    bring: equipment.join('. '),
  }
}
