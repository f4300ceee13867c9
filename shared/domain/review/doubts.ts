import type { FieldProblem } from '#shared/domain/errors'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'

/**
 * Values that are possible but rare enough to be asked about before signing (rules table 2: entered 0 to 80 mmHg, outside
 * 4 to 60 asks again). A doubt is confirmed by naming its field; it is never changed for the examiner.
 */
export function doubtsOf(findings: ReviewFindings): FieldProblem[] {
  const doubts: FieldProblem[] = []
  if (findings.iopMmHg !== undefined && (findings.iopMmHg < 4 || findings.iopMmHg > 60)) {
    doubts.push({ field: 'iopMmHg', code: 'doubtful', message: `Pressure is usually 4 to 60 mmHg. Measure again, or confirm ${findings.iopMmHg}.`, limit: '4 to 60 mmHg' })
  }
  if (findings.cctUm !== undefined && (findings.cctUm < 420 || findings.cctUm > 900)) {
    doubts.push({ field: 'cctUm', code: 'doubtful', message: `Corneal thickness is usually 420 to 900 micrometres after surgery. Measure again, or confirm ${findings.cctUm}.`, limit: '420 to 900 micrometres' })
  }
  if (findings.acuityPinhole && findings.acuityUnaided && findings.acuityPinhole.logMar > findings.acuityUnaided.logMar + 0.1) {
    doubts.push({ field: 'acuityPinhole', code: 'doubtful', message: 'Sight through the pinhole is worse than unaided. Check that the two are not exchanged, or confirm.' })
  }
  if (findings.wound === 'leaking' && findings.seidel === 'negative') {
    doubts.push({ field: 'seidel', code: 'contradiction', message: 'The wound is called leaking and the fluorescein test negative. Correct one, or confirm both.' })
  }
  if (findings.wound === 'sealed' && findings.seidel === 'spontaneous') {
    doubts.push({ field: 'wound', code: 'contradiction', message: 'The wound is called sealed and the fluorescein test shows a leak without pressing. Correct one, or confirm both.' })
  }
  return doubts
}

/** The better (smaller) of unaided and pinhole logMAR, or undefined when neither was recorded. */
export function bestLogMarOf(findings: ReviewFindings): number | undefined {
  const values = [findings.acuityUnaided?.logMar, findings.acuityPinhole?.logMar].filter(value => value !== undefined)
  return values.length ? Math.min(...values) : undefined
}
