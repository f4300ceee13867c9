import { performance } from 'node:perf_hooks'
import { pathToFileURL } from 'node:url'
import { evaluateReview } from '#shared/domain/escalation/evaluate'
import { cellGrades, chamberDepths, flareGrades, lensPositions, oedemaGrades, redReflexes, seidelResults } from '#shared/domain/review/vocabulary'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { dayOneContext, quietFindings } from '#tests/factories/escalation'

/** Whole-table evaluations per second that one core must reach: a page evaluates at every key, the server at every signing. */
export const rulesPerSecondWanted = 50_000

export interface RulesBench { evaluations: number, perSecond: number, reasons: number, wanted: number, isEnough: boolean }

/** Sheets from a fixed sequence (a linear congruential one, Numerical Recipes' constants), so that every run evaluates the same. */
function sheets(count: number): { findings: ReviewFindings, context: ReviewContext }[] {
  let seed = 1
  const next = (below: number) => {
    seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0
    return Math.floor(seed / 2 ** 32 * below)
  }
  const of = <T>(values: readonly T[]): T => values[next(values.length)]!
  return Array.from({ length: count }, () => ({
    findings: {
      ...quietFindings, painScore: next(11), iopMmHg: next(61), oedemaGrade: of(oedemaGrades), cells: of(cellGrades), flare: of(flareGrades), chamberDepth: of(chamberDepths), seidel: of(seidelResults), lensPosition: of(lensPositions), redReflex: of(redReflexes),
      hypopyonMm: next(8) === 0 ? 1 : 0, acuityUnaided: { logMar: next(30) / 10, entered: 'bench' }, acuityPinhole: undefined,
    },
    context: { ...dayOneContext, daysAfterSurgery: next(40), riskReasons: next(3) === 0 ? ['glaucoma'] : [] },
  }))
}

/** Evaluates the whole table on mixed sheets for about `forMs` milliseconds after a warm-up. */
export function benchRules(forMs = 2_000): RulesBench {
  const all = sheets(512)
  let reasons = 0
  const round = () => {
    for (const { findings, context } of all) reasons += evaluateReview(findings, context).reasons.length
  }
  for (let warm = 0; warm < 20; warm++) round()
  reasons = 0
  let evaluations = 0
  const started = performance.now()
  let spentMs = 0
  while (spentMs < forMs) {
    round()
    evaluations += all.length
    spentMs = performance.now() - started
  }
  const perSecond = Math.round(evaluations / spentMs * 1_000)
  return { evaluations, perSecond, reasons, wanted: rulesPerSecondWanted, isEnough: perSecond >= rulesPerSecondWanted }
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  const result = benchRules()
  console.log(JSON.stringify(result))
  process.exitCode = result.isEnough ? 0 : 1
}
