import { pressureFacts } from '#shared/domain/escalation/pressure-rules'
import { bestLogMarOf } from '#shared/domain/review/doubts'
import { pressureUnchecked } from '#shared/domain/review/pressure'
import type { ReviewContext, ReviewFindings, VisitKind } from '#shared/domain/review/vocabulary'

type Finding = keyof ReviewFindings
const known = (findings: ReviewFindings, ...fields: Finding[]) => fields.every(field => findings[field] !== undefined)

/** What the rules look at, in the words of the sheet, and how one knows that they could. */
const checks: readonly { words: string, isKnown: (findings: ReviewFindings, context: ReviewContext) => boolean }[] = [
  { words: 'pain', isKnown: findings => known(findings, 'painScore') },
  { words: 'sight', isKnown: findings => bestLogMarOf(findings) !== undefined },
  { words: 'sight against before surgery', isKnown: (_findings, context) => context.preoperative.bestLogMar !== undefined },
  { words: 'the pressure', isKnown: (findings, context) => pressureFacts(findings, context) !== undefined },
  { words: 'corneal oedema', isKnown: findings => known(findings, 'oedemaGrade') },
  { words: 'an infiltrate or an epithelial defect', isKnown: findings => known(findings, 'infiltrate', 'epithelialDefectMm') },
  { words: 'the wound', isKnown: findings => known(findings, 'wound') },
  { words: 'the wound with fluorescein', isKnown: findings => known(findings, 'seidel') && findings.seidel !== 'not-done' },
  { words: 'iris in the wound', isKnown: findings => known(findings, 'irisInWound') },
  { words: 'the depth of the chamber', isKnown: findings => known(findings, 'chamberDepth') },
  { words: 'cells', isKnown: findings => known(findings, 'cells') },
  { words: 'flare', isKnown: findings => known(findings, 'flare') },
  { words: 'fibrin or hypopyon', isKnown: findings => known(findings, 'fibrin', 'hypopyonMm') },
  { words: 'blood in the chamber', isKnown: findings => known(findings, 'hyphaema') },
  { words: 'the vitreous', isKnown: findings => known(findings, 'vitreousCells', 'vitreousInChamber') },
  { words: 'the position of the lens', isKnown: findings => known(findings, 'lensPosition') },
  { words: 'a lens fragment', isKnown: findings => known(findings, 'lensFragment') },
  { words: 'the red reflex', isKnown: findings => known(findings, 'redReflex') },
  { words: 'swollen lids', isKnown: findings => known(findings, 'lidSwelling') },
  { words: 'flashes, floaters or a curtain', isKnown: findings => known(findings, 'flashesOrFloaters', 'curtainOrFieldLoss') },
  { words: 'the drops', isKnown: findings => known(findings, 'dropsUse') },
]

/** What could not be checked because it was not recorded, in words. Unanswered is never read as normal. */
export function uncheckedOf(findings: ReviewFindings, context: ReviewContext): string[] {
  const lines = checks.filter(each => !each.isKnown(findings, context)).map(each => each.words)
  const facts = pressureFacts(findings, context)
  if (!facts) return lines
  return [...new Set([...lines, ...pressureUnchecked(facts)])]
}

const everyVisit: readonly VisitKind[] = ['day-one', 'first-week', 'final', 'unplanned']

/** Without these a sheet cannot be signed as complete. Common practice: history, sight, pressure, cornea, wound, chamber, lens. */
const requiredFindings: readonly { field: Finding, sentence: string, visits: readonly VisitKind[] }[] = [
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

/** What prevents signing this sheet as complete, each with its field and what to record. */
export function missingRequiredFindings(findings: ReviewFindings, visitKind: VisitKind): { field: Finding, sentence: string }[] {
  return requiredFindings.filter(each => each.visits.includes(visitKind) && findings[each.field] === undefined).map(({ field, sentence }) => ({ field, sentence }))
}
