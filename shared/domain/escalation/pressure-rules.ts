import { moreUrgent } from '#shared/domain/escalation/merge'
import { hit, limit, lowerable, raisable, rule } from '#shared/domain/escalation/rule-kit'
import type { EscalationRule, RuleHit, Thresholds } from '#shared/domain/escalation/rule-kit'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { pressureConcern } from '#shared/domain/review/pressure'
import type { PressureFacts, PressureReasonId } from '#shared/domain/review/pressure'
import { pressureBands, pressureLimits } from '#shared/domain/review/pressure-bands'
import type { PressureLimits } from '#shared/domain/review/pressure-bands'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'

/** What the pressure table looks at, or undefined when no possible pressure was recorded. */
export function pressureFacts(findings: ReviewFindings, context: ReviewContext): PressureFacts | undefined {
  const { iopMmHg } = findings
  if (iopMmHg === undefined || !(iopMmHg >= pressureLimits.leastMmHg && iopMmHg <= pressureLimits.mostMmHg)) return undefined
  return {
    iopMmHg, riskReasons: context.riskReasons, preoperativeIopMmHg: context.preoperative.iopMmHg, daysAfterSurgery: context.daysAfterSurgery, onSteroidDrops: context.onSteroidDrops,
    seidel: findings.seidel, woundLeaking: findings.wound === undefined ? undefined : findings.wound === 'leaking', chamberDepth: findings.chamberDepth, painScore: findings.painScore, vomiting: findings.vomiting, oedemaGrade: findings.oedemaGrade,
  }
}

/** Below this the rows ask about a leak and the chamber. */
const leastUsualMmHg = pressureBands.find(band => !band.withLeakOrShallow)?.fromMmHg ?? 0

/** A cheap no before the whole table is read: most sheets have an ordinary pressure, and the page evaluates at every key. */
function mayFire(id: PressureReasonId, facts: PressureFacts, limits: PressureLimits): boolean {
  if (id === 'pressure.symptoms') return facts.iopMmHg >= limits.withSymptomsFromMmHg
  if (id === 'pressure.steroid-response') return facts.onSteroidDrops === true && facts.iopMmHg >= limits.steroidFromMmHg
  if (id === 'pressure.rise') return facts.preoperativeIopMmHg !== undefined && facts.iopMmHg - facts.preoperativeIopMmHg >= limits.riseCountsMmHg
  return id === 'pressure.low' ? facts.iopMmHg < leastUsualMmHg : facts.iopMmHg >= leastUsualMmHg
}

/** The hit of one row of the pressure table (review/pressure-bands), with limits that a site may have tightened. */
function fromTable(id: PressureReasonId, findings: ReviewFindings, context: ReviewContext, limits: PressureLimits, ...fired: (keyof ReviewFindings)[]): RuleHit | undefined {
  const facts = pressureFacts(findings, context)
  const reason = facts && mayFire(id, facts, limits) && pressureConcern(facts, pressureBands, limits)?.reasons.find(each => each.id === id)
  if (!reason) return undefined
  const before = context.preoperative.iopMmHg
  const beside: Record<string, unknown> = {}
  if (before !== undefined) beside.beforeMmHg = before
  if (context.riskReasons.length > 0) beside.riskReasons = [...context.riskReasons]
  return { urgency: reason.urgency, sentence: `Pressure ${findings.iopMmHg} mmHg. ${reason.sentence}`, fired: ['iopMmHg', 'iopMethod', ...fired], source: reason.source, beside }
}

/** A tightened limit only ever adds to what the table says. */
function atLeast(urgency: Urgency | undefined, table: RuleHit | undefined, findings: ReviewFindings): RuleHit | undefined {
  if (!urgency || (table && moreUrgent(table.urgency, urgency) === table.urgency)) return table
  return { ...(table ?? hit(urgency, `Pressure ${findings.iopMmHg} mmHg. Beyond this site’s limit.`, 'iopMmHg', 'iopMethod')), urgency }
}

/** With the table's own limits a rise has already counted at least as high, so that one row is named once. */
const raisedLimits = { todayFromMmHg: lowerable(30, 25, 'mmHg'), nowFromMmHg: lowerable(40, 32, 'mmHg'), atRiskNowFromMmHg: lowerable(35, 28, 'mmHg') }
const isTightened = (at: Thresholds) => Object.entries(raisedLimits).some(([name, threshold]) => at[name] !== threshold.value)

export const pressureRules: readonly EscalationRule[] = [
  rule('pressure.low', 'proposed', 'proposed; 5 mmHg as hypotony is the commonest definition, below 8 mmHg suspicious for a wound leak', 'Pressure 7 or less; more urgent at 5 or less, or with a leak or a shallow chamber', (findings, context, at) => {
    const table = fromTable('pressure.low', findings, context, pressureLimits, 'seidel', 'wound', 'chamberDepth')
    const isLow = pressureFacts(findings, context) !== undefined && findings.iopMmHg! <= limit(at, 'todayUpToMmHg')
    return atLeast(isLow ? 'today' : undefined, table, findings)
  }, { todayUpToMmHg: raisable(5, 7, 'mmHg') }),
  rule('pressure.rise', 'proposed', 'rises of 10 and 20 mmHg are reported categories; proposed', 'A rise over the pressure before surgery that counts one row higher', (findings, context, at) => fromTable('pressure.rise', findings, context, { ...pressureLimits, riseCountsMmHg: limit(at, 'riseMmHg') }), { riseMmHg: lowerable(pressureLimits.riseCountsMmHg, 5, 'mmHg') }),
  rule('pressure.raised', 'citation', 'Ahmed 2002, J Cataract Refract Surg 28:100-108; Wills Eye Manual, 8th edition; proposed', 'Pressure 25 or more, 22 or more in an eye at risk', (findings, context, at, fired) => {
    const table = fromTable('pressure.raised', findings, context, pressureLimits)
    if (!table && fired.has('pressure.rise') && !isTightened(at)) return undefined
    const iopMmHg = pressureFacts(findings, context)?.iopMmHg ?? 0
    const isNow = iopMmHg >= limit(at, 'nowFromMmHg') || (context.riskReasons.length > 0 && iopMmHg >= limit(at, 'atRiskNowFromMmHg'))
    return atLeast(isNow ? 'now' : iopMmHg >= limit(at, 'todayFromMmHg') ? 'today' : undefined, table, findings)
  }, raisedLimits),
  rule('pressure.symptoms', 'proposed', 'proposed', 'High pressure with pain, vomiting or corneal oedema', (findings, context, at) => fromTable('pressure.symptoms', findings, context, { ...pressureLimits, withSymptomsFromMmHg: limit(at, 'fromMmHg'), painFrom: limit(at, 'painFrom'), oedemaFrom: limit(at, 'oedemaFrom') }, 'painScore', 'vomiting', 'oedemaGrade'), { fromMmHg: lowerable(pressureLimits.withSymptomsFromMmHg, 25, 'mmHg'), painFrom: lowerable(pressureLimits.painFrom, 2, 'of 10'), oedemaFrom: lowerable(pressureLimits.oedemaFrom, 1, 'grade') }),
  rule('pressure.steroid-response', 'citation', 'Chang, Tan, Tripodis 2011', 'On steroid drops from day 14: high pressure with a rise over 25 %', (findings, context, at) => fromTable('pressure.steroid-response', findings, context, { ...pressureLimits, steroidFromDay: limit(at, 'fromDay'), steroidFromMmHg: limit(at, 'fromMmHg') }), { fromDay: lowerable(pressureLimits.steroidFromDay, 7, 'days'), fromMmHg: lowerable(pressureLimits.steroidFromMmHg, 24, 'mmHg') }),
]
