import { fireRules, highestOf } from '#shared/domain/escalation/fire-rules'
import { cellRank, leaking } from '#shared/domain/escalation/rule-kit'
import type { ThresholdOverrides } from '#shared/domain/escalation/thresholds'
import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { urgencies } from '#shared/domain/pathway/vocabulary'
import { pressureLimits } from '#shared/domain/review/pressure-bands'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { cellGrades, oedemaGrades } from '#shared/domain/review/vocabulary'

interface Step { words: string, change: Partial<ReviewFindings> }
/** One finding made worse step by step, from what is recorded. */
type Worsening = (findings: ReviewFindings) => Step[]

const firstRaisedMmHg = 22
const wholeNumbers = (from: number, to: number) => Array.from({ length: Math.max(0, to - from + 1) }, (_, index) => from + index)

const worsenings: readonly Worsening[] = [
  findings => oedemaGrades.filter(grade => grade > (findings.oedemaGrade ?? 0)).map(grade => ({ words: `oedema ${grade}`, change: { oedemaGrade: grade } })),
  findings => wholeNumbers((findings.painScore ?? 0) + 1, 10).map(painScore => ({ words: `pain ${painScore}${painScore < 10 ? ' or more' : ''}`, change: { painScore } })),
  findings => wholeNumbers(Math.max(firstRaisedMmHg, Math.floor(findings.iopMmHg ?? 0) + 1), pressureLimits.mostMmHg).map(iopMmHg => ({ words: `${iopMmHg} mmHg`, change: { iopMmHg } })),
  findings => cellGrades.filter((_grade, rank) => rank > cellRank(findings)).map(cells => ({ words: `cells ${cells}`, change: { cells } })),
  findings => findings.flare === '4+' ? [] : [{ words: 'flare 4+', change: { flare: '4+' } }],
  findings => leaking(findings) ? [] : [{ words: 'a leak on pressing', change: { seidel: 'provoked' } }, { words: 'a leaking wound', change: { seidel: 'spontaneous' } }],
  findings => findings.chamberDepth === 'flat' ? [] : [{ words: 'a shallow chamber', change: { chamberDepth: 'shallow' } }, { words: 'a flat chamber', change: { chamberDepth: 'flat' } }],
  findings => (findings.hypopyonMm ?? 0) > 0 ? [] : [{ words: 'hypopyon', change: { hypopyonMm: 0.5 } }],
]

/** Near misses shown at once for one urgency: more would not be read. */
const mostNamed = 3

/**
 * What would make this sheet more urgent, one finding at a time: for each finding the first step that does, gathered by the urgency it
 * would have, most urgent first: `{ sentence: 'oedema 2, pain 4 or more, or 35 mmHg', urgency: 'now' }`.
 */
export function wouldBecome(findings: ReviewFindings, context: ReviewContext, overrides: ThresholdOverrides = {}): { sentence: string, urgency: Urgency }[] {
  const rank = (urgency: Urgency | null) => urgency === null ? urgencies.length : urgencies.indexOf(urgency)
  const urgencyOf = (tried: ReviewFindings) => highestOf(fireRules(tried, context, overrides))
  const current = rank(urgencyOf(findings))
  if (current === 0) return []
  const words: Record<Urgency, string[]> = { 'now': [], 'today': [], 'this-week': [] }
  for (const worsening of worsenings) {
    for (const step of worsening(findings)) {
      const urgency = urgencyOf({ ...findings, ...step.change })
      if (urgency === null || rank(urgency) >= current) continue
      words[urgency].push(step.words)
      break
    }
  }
  return urgencies.filter(urgency => words[urgency].length > 0).map(urgency => ({ urgency, sentence: listed(words[urgency].slice(0, mostNamed)) }))
}

function listed(words: readonly string[]): string {
  if (words.length < 3) return words.join(' or ')
  return `${words.slice(0, -1).join(', ')}, or ${words.at(-1)}`
}
