import { DomainError } from '#shared/domain/errors'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { bandRange, pressureBands, pressureLimits, riskReasonLabels } from '#shared/domain/review/pressure-bands'
import type { PressureAction, PressureBand, PressureLimits } from '#shared/domain/review/pressure-bands'
import type { ChamberDepth, OedemaGrade, RiskReason, SeidelResult } from '#shared/domain/review/vocabulary'

/** What the pressure table looks at. Absent means not recorded, never normal. */
export interface PressureFacts {
  iopMmHg: number
  riskReasons: readonly RiskReason[]
  preoperativeIopMmHg?: number
  daysAfterSurgery?: number
  onSteroidDrops?: boolean
  seidel?: SeidelResult
  /** The wound was recorded as leaking. */
  woundLeaking?: boolean
  chamberDepth?: ChamberDepth
  painScore?: number
  vomiting?: boolean
  oedemaGrade?: OedemaGrade
}

export const pressureReasonIds = ['pressure.low', 'pressure.raised', 'pressure.rise', 'pressure.symptoms', 'pressure.steroid-response'] as const
export type PressureReasonId = typeof pressureReasonIds[number]

export interface PressureReason {
  id: PressureReasonId
  urgency: Urgency
  sentence: string
  source: string
}

export interface PressureConcern {
  /** The highest of the reasons. */
  urgency: Urgency
  reasons: PressureReason[]
  /** The row after a rise was counted in. */
  band: PressureBand['id']
  recheckWithinHours?: number
}

function worseOf(a: Urgency, b: Urgency): Urgency {
  return urgencies.indexOf(a) <= urgencies.indexOf(b) ? a : b
}

/**
 * Refuses what no eye can have. Outside 4 to 60 see `pressureDoubt`.
 * @throws DomainError `review.pressure-out-of-range`
 */
export function assertPressure(iopMmHg: number, field = 'iopMmHg'): void {
  if (Number.isFinite(iopMmHg) && iopMmHg >= pressureLimits.leastMmHg && iopMmHg <= pressureLimits.mostMmHg) return
  const message = 'Enter a pressure from 0 to 80 mmHg, or leave it blank if it was not measured.'
  throw new DomainError('review.pressure-out-of-range', message, { fields: [{ field, code: 'out-of-range', message, limit: '0 to 80 mmHg' }] })
}

/** A question to ask before a rare value is believed; undefined when there is none. */
export function pressureDoubt(iopMmHg: number): string | undefined {
  if (iopMmHg >= pressureLimits.askAgainBelowMmHg && iopMmHg <= pressureLimits.askAgainAboveMmHg) return undefined
  return `${iopMmHg} mmHg is rare. Measure again, then confirm it.`
}

/**
 * The row for a pressure. Between two whole numbers the lower row holds, so that 7.5 is still low and 29.5 is not
 * yet 30.
 */
export function pressureBandIndex(iopMmHg: number, bands: readonly PressureBand[] = pressureBands): number {
  assertPressure(iopMmHg)
  return bands.findLastIndex(band => iopMmHg >= band.fromMmHg)
}

function leaksOrShallow(facts: PressureFacts): boolean {
  return facts.seidel === 'spontaneous' || facts.woundLeaking === true || facts.chamberDepth === 'shallow' || facts.chamberDepth === 'flat'
}

function actionOf(band: PressureBand, facts: PressureFacts): PressureAction | undefined {
  if (band.withLeakOrShallow && leaksOrShallow(facts)) return band.withLeakOrShallow
  return facts.riskReasons.length > 0 ? band.eyesAtRisk : band.otherEyes
}

function bandSentence(band: PressureBand, facts: PressureFacts): string {
  if (band.withLeakOrShallow) return `${bandRange(band)}${leaksOrShallow(facts) ? ', with a leak or a shallow chamber' : ''}.`
  const why = facts.riskReasons.map(reason => riskReasonLabels[reason]).join(', ')
  return `${bandRange(band)}${why ? `, eye at risk (${why})` : ''}.`
}

function rowReason(facts: PressureFacts, bands: readonly PressureBand[], limits: PressureLimits): { band: PressureBand, action?: PressureAction, reason?: PressureReason } {
  const row = pressureBandIndex(facts.iopMmHg, bands)
  const riseMmHg = facts.preoperativeIopMmHg === undefined ? 0 : facts.iopMmHg - facts.preoperativeIopMmHg
  const counted = riseMmHg >= limits.riseCountsMmHg && row + 1 < bands.length
  const band = bands[counted ? row + 1 : row]!
  const action = actionOf(band, facts)
  if (!action) return { band }
  const sentence = counted
    ? `Risen by ${Math.round(riseMmHg * 10) / 10} mmHg since before surgery, so it counts as ${bandSentence(band, facts)}`
    : bandSentence(band, facts)
  const id = counted ? 'pressure.rise' : band.withLeakOrShallow ? 'pressure.low' : 'pressure.raised'
  return { band, action, reason: { id, urgency: action.urgency, sentence, source: band.source } }
}

function symptomReason(facts: PressureFacts, limits: PressureLimits): PressureReason | undefined {
  if (facts.iopMmHg < limits.withSymptomsFromMmHg) return undefined
  const signs = [
    (facts.painScore ?? 0) >= limits.painFrom && `pain ${facts.painScore} of 10`,
    facts.vomiting && 'vomiting',
    (facts.oedemaGrade ?? 0) >= limits.oedemaFrom && `corneal oedema ${facts.oedemaGrade}`,
  ].filter(sign => typeof sign === 'string')
  if (signs.length === 0) return undefined
  return { id: 'pressure.symptoms', urgency: 'now', sentence: `${limits.withSymptomsFromMmHg} mmHg or more with ${signs.join(', ')}.`, source: 'proposed' }
}

function steroidReason(facts: PressureFacts, limits: PressureLimits): PressureReason | undefined {
  const { preoperativeIopMmHg: before, daysAfterSurgery: day } = facts
  if (!facts.onSteroidDrops || before === undefined || day === undefined) return undefined
  const risen = facts.iopMmHg > before * (1 + limits.steroidRiseShare) + 1e-9
  if (day < limits.steroidFromDay || facts.iopMmHg < limits.steroidFromMmHg || !risen) return undefined
  return { id: 'pressure.steroid-response', urgency: 'today', sentence: `Day ${day} on steroid drops, ${facts.iopMmHg} mmHg, more than 25 % above ${before} mmHg before surgery: steroid response.`, source: 'Chang, Tan, Tripodis 2011' }
}

/**
 * What a pressure raises, and why; undefined when it raises nothing. Adding a worse fact never lowers the urgency.
 * @throws DomainError `review.pressure-out-of-range`
 */
export function pressureConcern(facts: PressureFacts, bands: readonly PressureBand[] = pressureBands, limits: PressureLimits = pressureLimits): PressureConcern | undefined {
  const row = rowReason(facts, bands, limits)
  const reasons = [row.reason, symptomReason(facts, limits), steroidReason(facts, limits)].filter(reason => reason !== undefined)
  if (reasons.length === 0) return undefined
  const urgency = reasons.map(reason => reason.urgency).reduce(worseOf)
  const recheckWithinHours = row.action?.recheckWithinHours
  return { urgency, reasons, band: row.band.id, ...(recheckWithinHours === undefined ? {} : { recheckWithinHours }) }
}

/** What the table could not look at, in words for the sheet. Unanswered is never read as normal. */
export function pressureUnchecked(facts: PressureFacts): string[] {
  const low = facts.iopMmHg < 8
  const high = facts.iopMmHg >= pressureLimits.withSymptomsFromMmHg
  return [
    facts.preoperativeIopMmHg === undefined && 'the rise since before surgery',
    low && (facts.seidel === undefined || facts.seidel === 'not-done') && facts.woundLeaking === undefined && 'a wound leak',
    low && facts.chamberDepth === undefined && 'the depth of the chamber',
    high && facts.painScore === undefined && 'pain',
    high && facts.vomiting === undefined && 'vomiting',
    high && facts.oedemaGrade === undefined && 'corneal oedema',
    facts.iopMmHg >= pressureLimits.steroidFromMmHg && facts.onSteroidDrops === undefined && (facts.daysAfterSurgery ?? 0) >= pressureLimits.steroidFromDay && 'steroid drops',
  ].filter(item => typeof item === 'string')
}

/** Lowest pressure, in mmHg, at which this eye reaches an urgency by the table alone: the sheet's "at 30 or more". */
export function pressureLimitFor(urgency: Urgency, riskReasons: readonly RiskReason[], bands: readonly PressureBand[] = pressureBands): number | undefined {
  return bands.find((band) => {
    const action = band.withLeakOrShallow ? undefined : actionOf(band, { iopMmHg: band.fromMmHg, riskReasons })
    return action !== undefined && worseOf(action.urgency, urgency) === action.urgency
  })?.fromMmHg
}
