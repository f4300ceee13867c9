import { moreUrgent } from '#shared/domain/escalation/merge'
import { escalationRules } from '#shared/domain/escalation/rules'
import type { EscalationRule, Thresholds } from '#shared/domain/escalation/rules'
import type { EscalationReason } from '#shared/domain/escalation/vocabulary'
import { DomainError } from '#shared/domain/errors'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import { pressureConcern, pressureUnchecked } from '#shared/domain/review/pressure'
import type { PressureFacts } from '#shared/domain/review/pressure'
import type { ReviewContext, ReviewFindings, VisitKind } from '#shared/domain/review/vocabulary'

/** Names the whole table a review was evaluated with. */
export const rulesVersion = '2026-12-01'
export type ThresholdOverrides = Record<string, Thresholds>

export interface ReviewOutcome {
  reasons: EscalationReason[]
  urgency: Urgency | null
  /** What could not be checked because it was not recorded. */
  unchecked: string[]
}

/**
 * Evaluates every rule on one sheet: the same function on the page ("what this will raise") and on the server at signing.
 * Pure and total: any partial findings give an answer; nothing unrecorded is read as normal.
 */
export function evaluateReview(findings: ReviewFindings, context: ReviewContext, overrides: ThresholdOverrides = {}): ReviewOutcome {
  const reasons: EscalationReason[] = []
  for (const rule of escalationRules) {
    const hit = rule.evaluate(findings, context, thresholdsOf(rule, overrides[rule.id]))
    if (hit) reasons.push({ ruleId: rule.id, ruleVersion: rule.version, urgency: hit.urgency, sentence: hit.sentence, source: rule.source, ...(hit.alsoTell ? { alsoTell: hit.alsoTell } : {}), findings: pick(findings, hit.fired) })
  }
  const facts = pressureFacts(findings, context)
  if (facts) {
    for (const reason of pressureConcern(facts)?.reasons ?? []) {
      reasons.push({ ruleId: reason.id, ruleVersion: 1, urgency: reason.urgency, sentence: `Pressure ${facts.iopMmHg} mmHg. ${reason.sentence}`, source: reason.source, findings: pick(findings, ['iopMmHg', 'iopMethod']) })
    }
  }
  reasons.sort((left, right) => urgencies.indexOf(left.urgency) - urgencies.indexOf(right.urgency))
  return { reasons, urgency: reasons.length ? reasons.map(reason => reason.urgency).reduce(moreUrgent) : null, unchecked: uncheckedOf(findings, context, facts) }
}

function pressureFacts(findings: ReviewFindings, context: ReviewContext): PressureFacts | undefined {
  if (findings.iopMmHg === undefined) return undefined
  return {
    iopMmHg: findings.iopMmHg, riskReasons: context.riskReasons, preoperativeIopMmHg: context.preoperative.iopMmHg, daysAfterSurgery: context.daysAfterSurgery, onSteroidDrops: context.onSteroidDrops,
    seidel: findings.seidel, woundLeaking: findings.wound === undefined ? undefined : findings.wound === 'leaking', chamberDepth: findings.chamberDepth, painScore: findings.painScore, vomiting: findings.vomiting, oedemaGrade: findings.oedemaGrade,
  }
}

function pick(findings: ReviewFindings, fields: readonly (keyof ReviewFindings)[]): Record<string, unknown> {
  return Object.fromEntries([...new Set(fields)].filter(field => findings[field] !== undefined).map(field => [field, findings[field]]))
}

function uncheckedOf(findings: ReviewFindings, context: ReviewContext, facts: PressureFacts | undefined): string[] {
  const lines = facts ? pressureUnchecked(facts) : ['the pressure']
  if (context.preoperative.bestLogMar === undefined) lines.push('sight against before surgery')
  if (findings.redReflex === undefined) lines.push('the red reflex')
  if (findings.seidel === undefined || findings.seidel === 'not-done') lines.push('the wound with fluorescein')
  return [...new Set(lines)]
}

/** A rule's thresholds with a site's tightened values. */
function thresholdsOf(rule: EscalationRule, tightened: Thresholds | undefined): Thresholds {
  const base: Thresholds = {}
  for (const [name, threshold] of Object.entries(rule.thresholds)) base[name] = tightened?.[name] ?? threshold.value
  return base
}

/**
 * Checks tightened thresholds before they are kept.
 * @throws DomainError `escalation.invalid` for an unknown rule or name, a value outside its safe bounds, or a loosening.
 */
export function checkThresholds(overrides: ThresholdOverrides): void {
  for (const [ruleId, values] of Object.entries(overrides)) {
    const rule = escalationRules.find(each => each.id === ruleId)
    for (const [name, value] of Object.entries(values)) {
      const threshold = rule?.thresholds[name]
      const field = `${ruleId}.${name}`
      if (!threshold) throw new DomainError('escalation.invalid', `There is no limit ${field}.`, { fields: [{ field, code: 'unknown', message: 'There is no such limit.' }] })
      const [least, most] = threshold.safe
      if (!(value >= least && value <= most)) {
        throw new DomainError('escalation.invalid', `${field} may be ${least} to ${most} ${threshold.unit}: looser than published is refused.`, { fields: [{ field, code: 'out-of-range', message: `Use ${least} to ${most} ${threshold.unit}.`, limit: `${least} to ${most} ${threshold.unit}` }] })
      }
    }
  }
}

interface Required { field: keyof ReviewFindings, sentence: string, visits: readonly VisitKind[] }
const everyVisit: readonly VisitKind[] = ['day-one', 'first-week', 'final', 'unplanned']

/** Without these a sheet cannot be signed as complete. Common practice: history, sight, pressure, cornea, wound, chamber, lens. */
const requiredFindings: readonly Required[] = [
  { field: 'painScore', sentence: 'Pain: 0 to 10.', visits: everyVisit },
  { field: 'acuityUnaided', sentence: 'Vision, unaided.', visits: everyVisit },
  { field: 'iopMmHg', sentence: 'Pressure.', visits: ['day-one', 'first-week', 'final'] },
  { field: 'oedemaGrade', sentence: 'Corneal oedema.', visits: everyVisit },
  { field: 'cells', sentence: 'Cells in the anterior chamber.', visits: everyVisit },
  { field: 'flare', sentence: 'Flare in the anterior chamber.', visits: everyVisit },
  { field: 'chamberDepth', sentence: 'Depth of the anterior chamber.', visits: ['day-one', 'unplanned'] },
  { field: 'wound', sentence: 'The wound.', visits: ['day-one', 'first-week', 'unplanned'] },
  { field: 'lensPosition', sentence: 'Position of the lens.', visits: everyVisit },
]

export function missingRequiredFindings(findings: ReviewFindings, visitKind: VisitKind): { field: keyof ReviewFindings, sentence: string }[] {
  return requiredFindings.filter(each => each.visits.includes(visitKind) && findings[each.field] === undefined).map(({ field, sentence }) => ({ field, sentence }))
}

/** Findings that, one at a time, would make this sheet more urgent: "pain 4 or more would make this Now". */
export function wouldBecome(findings: ReviewFindings, context: ReviewContext, overrides: ThresholdOverrides = {}): { sentence: string, urgency: Urgency }[] {
  const current = evaluateReview(findings, context, overrides).urgency
  const rank = current === null ? urgencies.length : urgencies.indexOf(current)
  const trials: [string, Partial<ReviewFindings>][] = [
    ['pain 4 or more', { painScore: Math.max(4, findings.painScore ?? 0) }], ['cells 3+', { cells: '3+' }], ['oedema 2', { oedemaGrade: 2 }], ['oedema 3', { oedemaGrade: 3 }],
    ['a leaking wound', { wound: 'leaking', seidel: 'spontaneous' }], ['a shallow chamber', { chamberDepth: 'shallow' }], ['pressure 30 mmHg', { iopMmHg: 30 }], ['pressure 35 mmHg', { iopMmHg: 35 }], ['hypopyon', { hypopyonMm: 0.5 }],
  ]
  return trials.flatMap(([sentence, change]) => {
    if (change.iopMmHg !== undefined && (findings.iopMmHg ?? 0) >= change.iopMmHg) return []
    const urgency = evaluateReview({ ...findings, ...change }, context, overrides).urgency
    return urgency && urgencies.indexOf(urgency) < rank ? [{ sentence, urgency }] : []
  }).slice(0, 3)
}
