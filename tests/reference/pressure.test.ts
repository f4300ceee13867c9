import { describe, expect, it } from 'vitest'
import { pressureConcern } from '#shared/domain/review/pressure'
import type { PressureFacts } from '#shared/domain/review/pressure'

/**
 * The table of pressure after surgery, both columns at every boundary. Status: proposed, built on cited anchors
 * (hypotony 5 or less; below 8 suspicious for a leak; Ahmed et al. 2002, J Cataract Refract Surg 28:100-108: 28 and
 * 40 mmHg; Wills Eye Manual 8th ed.: treat most eyes above 30). A clinical lead signs it before use.
 */
const boundaries: [number, string, string][] = [
  [0, 'today', 'today'], [5, 'today', 'today'], [6, 'this-week', 'this-week'], [7, 'this-week', 'this-week'], [8, '-', '-'], [21, '-', '-'], [22, '-', 'this-week'],
  [24, '-', 'this-week'], [25, 'this-week', 'this-week'], [29, 'this-week', 'this-week'], [30, 'today', 'today'], [34, 'today', 'today'], [35, 'today', 'now'],
  [39, 'today', 'now'], [40, 'now', 'now'], [80, 'now', 'now'],
]
const urgencyOf = (facts: Partial<PressureFacts> & { iopMmHg: number }) => pressureConcern({ riskReasons: [], ...facts })?.urgency ?? '-'

describe('pressure table at its boundaries', () => {
  it.each(boundaries)('%d mmHg raises %s in other eyes and %s in eyes at risk', (iopMmHg, other, atRisk) => {
    expect(urgencyOf({ iopMmHg })).toBe(other)
    for (const reason of ['glaucoma', 'ocular-hypertension', 'disc-damage', 'only-eye', 'vein-occlusion', 'optic-neuropathy', 'steroid-response'] as const) {
      expect(urgencyOf({ iopMmHg, riskReasons: [reason] })).toBe(atRisk)
    }
  })

  // Low pressure with a leak or shallow chamber: Review of Optometry lists IOP below 8 and a shallow chamber as signs of a leak; proposed.
  it.each([[5, 'now'], [6, 'today'], [7, 'today'], [8, '-']])('%d mmHg with a leak or shallow chamber raises %s', (iopMmHg, urgency) => {
    expect(urgencyOf({ iopMmHg, seidel: 'spontaneous' })).toBe(urgency)
    expect(urgencyOf({ iopMmHg, woundLeaking: true })).toBe(urgency)
    expect(urgencyOf({ iopMmHg, chamberDepth: 'shallow', riskReasons: ['glaucoma'] })).toBe(urgency)
    expect(urgencyOf({ iopMmHg, chamberDepth: 'flat' })).toBe(urgency)
  })

  // +10 mmHg over the pre-operative pressure is a reported category (1847-eye series, J Glaucoma); one row up is proposed.
  it.each([[20, 10, '-', 'this-week'], [24, 14, 'this-week', 'this-week'], [24, 15, '-', 'this-week'], [28, 18, 'today', 'today'], [30, 20, 'today', 'now'], [35, 25, 'now', 'now'], [39, 30, 'today', 'now'], [45, 15, 'now', 'now']])(
    '%d mmHg after %d before raises %s, and %s at risk', (iopMmHg, preoperativeIopMmHg, other, atRisk) => {
      expect(urgencyOf({ iopMmHg, preoperativeIopMmHg })).toBe(other)
      expect(urgencyOf({ iopMmHg, preoperativeIopMmHg, riskReasons: ['disc-damage'] })).toBe(atRisk)
    })

  // Pain, vomiting or oedema at 30 or more: proposed.
  it.each([[30, { painScore: 4 }, 'now'], [30, { painScore: 3 }, 'today'], [30, { vomiting: true }, 'now'], [30, { oedemaGrade: 2 }, 'now'], [30, { oedemaGrade: 1 }, 'today'], [29, { painScore: 9, vomiting: true, oedemaGrade: 4 }, 'this-week']] as const)(
    '%d mmHg with %o raises %s', (iopMmHg, signs, urgency) => {
      expect(urgencyOf({ iopMmHg, ...signs })).toBe(urgency)
    })

  // Definition A of Chang, Tan, Tripodis 2011: a rise over 25 % with at least 28 mmHg on steroid; day 14: rise at 2 weeks or later suggests it.
  it.each([[28, 22, 14, true, 'today'], [28, 22.4, 14, true, 'this-week'], [28, 22, 13, true, 'this-week'], [28, 22, 14, false, 'this-week'], [27, 20, 14, true, 'this-week'], [29, 23.2, 21, true, 'this-week'], [29, 23, 21, true, 'today']])(
    '%d mmHg after %d on day %d, steroid %s, raises %s', (iopMmHg, preoperativeIopMmHg, daysAfterSurgery, onSteroidDrops, urgency) => {
      expect(urgencyOf({ iopMmHg, preoperativeIopMmHg, daysAfterSurgery, onSteroidDrops })).toBe(urgency)
    })
})
