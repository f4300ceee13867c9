import type { StopReason } from '#shared/domain/theatre/safety-check'

/** A lens in somebody's hand: from its label, or read aloud from the box. */
export interface HeldLens { model: string, powerD: number, expiresOn: string }
export interface PlannedLens { model: string, powerD: number }

/** Whether two names mean one model: spelling of spaces and capitals aside. */
export const sameModel = (one: string, other: string) => one.trim().replace(/\s+/g, ' ').toLowerCase() === other.trim().replace(/\s+/g, ' ').toLowerCase()

/**
 * Why this lens may not be opened for this eye. Nothing: it is the lens planned, and in date. `today` is the day at the site, `YYYY-MM-DD`;
 * a lens may be used on the day that stands on it (General Specifications of GS1, section 3.4.7: use on or before; from memory).
 */
export function lensReasons(held: HeldLens, plan: PlannedLens | null, today: string): StopReason[] {
  const reasons: StopReason[] = []
  if (!plan) reasons.push({ code: 'lens-no-plan', sentence: 'No lens is planned for this eye.' })
  if (plan && !sameModel(held.model, plan.model)) reasons.push({ code: 'lens-model', sentence: `The model is ${held.model}; planned is ${plan.model}.` })
  if (plan && held.powerD !== plan.powerD) reasons.push({ code: 'lens-power', sentence: `The power is ${dioptres(held.powerD)}; planned is ${dioptres(plan.powerD)}.` })
  if (held.expiresOn < today) reasons.push({ code: 'lens-expired', sentence: `The lens was to be used before ${held.expiresOn}.` })
  return reasons
}

const dioptres = (value: number) => `${value < 0 ? '−' : '+'}${Math.abs(value).toFixed(1)} D`
