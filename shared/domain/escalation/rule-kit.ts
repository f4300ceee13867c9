import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { bestLogMarOf } from '#shared/domain/review/doubts'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { cellGrades } from '#shared/domain/review/vocabulary'

/** One number of a rule that a clinical lead may tighten. `value` is the published or proposed start and the loosest end of `safe`. */
export interface Threshold { value: number, unit: string, safe: readonly [number, number], tighten: 'lower' | 'higher' }
export type Thresholds = Record<string, number>

export interface RuleHit {
  urgency: Urgency
  sentence: string
  fired: (keyof ReviewFindings)[]
  alsoTell?: 'clinical-lead'
  /** Facts from outside the sheet that took part. */
  beside?: Record<string, unknown>
  /** When one row of the rule has a source of its own. */
  source?: string
}

/**
 * Undefined when the rule does not fire. Absent findings never fire a rule and are never read as normal.
 * `fired` holds the ids of the rules before this one in the table that did fire on the same sheet.
 */
export type Evaluate = (findings: ReviewFindings, context: ReviewContext, at: Thresholds, fired: ReadonlySet<string>) => RuleHit | undefined

export const ruleLabels = ['citation', 'common practice', 'proposed'] as const
export type RuleLabel = typeof ruleLabels[number]

export interface EscalationRule {
  id: string
  version: number
  /** When it fires, in plain words for the list of rules. */
  when: string
  source: string
  /** 'proposed' rules are signed by a site's clinical lead before use. */
  label: RuleLabel
  thresholds: Record<string, Threshold>
  evaluate: Evaluate
}

export function rule(id: string, label: RuleLabel, source: string, when: string, evaluate: Evaluate, thresholds: Record<string, Threshold> = {}): EscalationRule {
  return { id, version: 1, when, source, label, thresholds, evaluate }
}

export function hit(urgency: Urgency, sentence: string, ...fired: (keyof ReviewFindings)[]): RuleHit {
  return { urgency, sentence, fired }
}

/** A limit that is tightened by lowering it, down to `least`. */
export function lowerable(value: number, least: number, unit: string): Threshold {
  return { value, unit, safe: [least, value], tighten: 'lower' }
}

/** A limit that is tightened by raising it, up to `most`. */
export function raisable(value: number, most: number, unit: string): Threshold {
  return { value, unit, safe: [value, most], tighten: 'higher' }
}

export function limit(at: Thresholds, name: string): number {
  const value = at[name]
  if (value === undefined) throw new RangeError(`a rule has no limit called ${name}`)
  return value
}

/** Place of the cell grade in the published order, 0 for none to 5 for 4+; -1 when it was not recorded. */
export const cellRank = (findings: ReviewFindings) => findings.cells === undefined ? -1 : cellGrades.indexOf(findings.cells)
export const onePlus = cellGrades.indexOf('1+')
export const twoPlus = cellGrades.indexOf('2+')
export const threePlus = cellGrades.indexOf('3+')

export const hypopyon = (findings: ReviewFindings) => (findings.hypopyonMm ?? 0) > 0
export const fibrin = (findings: ReviewFindings) => findings.fibrin === true || findings.flare === '4+'
export const leaking = (findings: ReviewFindings) => findings.seidel === 'spontaneous' || findings.wound === 'leaking'
export const shallow = (findings: ReviewFindings) => findings.chamberDepth === 'shallow' || findings.chamberDepth === 'flat'

/** By how many logMAR the best sight of this sheet is worse than an earlier one; 0 when either is unknown. Rounded to 0.001, so that 0.48 - 0.18 counts as 0.3. */
export function fallFrom(findings: ReviewFindings, before: number | undefined): number {
  const best = bestLogMarOf(findings)
  return best === undefined || before === undefined ? 0 : Math.round((best - before) * 1000) / 1000
}

export const reasonWritten = (findings: ReviewFindings) => Boolean(findings.acuityReason?.trim())

/** Corneal oedema 2 or more is a reason for poor sight on days 0 to 7, and on no later day. */
export const oedemaExplains = (findings: ReviewFindings, context: ReviewContext) => (findings.oedemaGrade ?? 0) >= 2 && context.daysAfterSurgery <= 7
