import { cellRank, fallFrom, fibrin, hit, hypopyon, leaking, limit, lowerable, onePlus, raisable, reasonWritten, rule, shallow, threePlus, twoPlus } from '#shared/domain/escalation/rule-kit'
import type { EscalationRule, Thresholds } from '#shared/domain/escalation/rule-kit'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'

/** Signs counted by infection.suspected. Any two are enough; pain and hypopyon are never both needed. */
export function infectionSigns(findings: ReviewFindings, context: ReviewContext, at: Thresholds): { words: string, fields: (keyof ReviewFindings)[] }[] {
  const pain = findings.painScore ?? 0
  const grown = context.previous?.painScore === undefined ? 0 : pain - context.previous.painScore
  const growing = findings.painGrowing === true || grown >= limit(at, 'painGrowthBy')
  const fall = limit(at, 'acuityFallLogMar')
  const fell = fallFrom(findings, context.previous?.bestLogMar) >= fall || (fallFrom(findings, context.preoperative.bestLogMar) >= fall && !reasonWritten(findings))
  const signs: [boolean, string, (keyof ReviewFindings)[]][] = [
    [pain >= limit(at, 'painFrom') || growing, growing ? 'pain growing' : `pain ${pain} of 10`, ['painScore', 'painGrowing']],
    [fell, 'sight worse', ['acuityUnaided', 'acuityPinhole']],
    [cellRank(findings) >= threePlus, `cells ${findings.cells}`, ['cells']],
    [fibrin(findings), 'fibrin', ['fibrin', 'flare']],
    [hypopyon(findings), 'hypopyon', ['hypopyonMm']],
    [findings.lidSwelling === true, 'lids swollen', ['lidSwelling']],
    [findings.redReflex === 'dull' || findings.redReflex === 'absent', `red reflex ${findings.redReflex}`, ['redReflex']],
    [findings.vitreousCells === true, 'vitreous cells', ['vitreousCells']],
  ]
  return signs.filter(([isThere]) => isThere).map(([, words, fields]) => ({ words, fields }))
}

/** Infection, inflammation, cornea, wound and chamber. */
export const frontRules: readonly EscalationRule[] = [
  rule('infection.suspected', 'citation', 'EVS 1995, Arch Ophthalmol 113:1479-1496; ESCRS; College of Optometrists', 'Two or more of pain, worse sight, cells 3+ or more, fibrin, hypopyon, lid swelling, a dull or absent red reflex, vitreous cells', (findings, context, at) => {
    const signs = infectionSigns(findings, context, at)
    return signs.length >= limit(at, 'signs') ? hit('now', `Infection suspected: ${signs.map(sign => sign.words).join(', ')}.`, ...signs.flatMap(sign => sign.fields)) : undefined
  }, { signs: lowerable(2, 1, 'signs'), painFrom: lowerable(4, 2, 'of 10'), painGrowthBy: lowerable(2, 1, 'of 10'), acuityFallLogMar: lowerable(0.3, 0.1, 'logMAR') }),
  rule('segment.toxic-pattern', 'citation', 'Toxic anterior segment syndrome literature', 'Days 0 to 2: oedema 3 or more from limbus to limbus, with cells 3+ or more, fibrin or hypopyon', (findings, context) => {
    const isToxic = context.daysAfterSurgery <= 2 && (findings.oedemaGrade ?? 0) >= 3 && findings.oedemaLimbusToLimbus === true && (cellRank(findings) >= threePlus || fibrin(findings) || hypopyon(findings))
    return isToxic ? hit('now', 'Limbus-to-limbus oedema with inflammation in the first two days: treat as infection until excluded, and look at every other eye of that list.', 'oedemaGrade', 'oedemaLimbusToLimbus', 'cells', 'flare', 'fibrin', 'hypopyonMm') : undefined
  }),
  rule('list.cluster', 'proposed', 'RCOphth 2022; proposed', 'A second suspected infection or toxic pattern from one list, or at one site within a week', (_findings, context, _at, fired) => {
    if (!fired.has('infection.suspected') && !fired.has('segment.toxic-pattern')) return undefined
    const onList = context.otherSuspectedOnList ?? 0
    const atSite = context.otherSuspectedAtSiteThisWeek ?? 0
    if (onList + atSite === 0) return undefined
    const where = onList > 0 ? 'from one list' : 'at this site within a week'
    return { ...hit('now', `A second suspected infection or toxic reaction ${where}.`), alsoTell: 'clinical-lead', beside: { otherSuspectedOnList: onList, otherSuspectedAtSiteThisWeek: atSite } }
  }),
  rule('chamber.hypopyon', 'common practice', 'common practice', 'Hypopyon of any height', findings => hypopyon(findings) ? hit('now', `Hypopyon ${findings.hypopyonMm} mm.`, 'hypopyonMm') : undefined),
  rule('chamber.fibrin', 'proposed', 'SUN 2005 (flare 4+ is fibrin); proposed', 'Fibrin, or flare 4+', findings => fibrin(findings) ? hit('now', findings.fibrin ? 'Fibrin in the anterior chamber.' : 'Flare 4+, which is fibrin.', 'fibrin', 'flare') : undefined),
  rule('chamber.cells-4', 'proposed', 'SUN 2005; proposed', 'Cells 4+', findings => findings.cells === '4+' ? hit('now', 'Cells 4+: more than 50 in the beam.', 'cells') : undefined),
  rule('chamber.cells-3', 'proposed', 'SUN 2005; proposed', 'Cells 3+', findings => findings.cells === '3+' ? hit('today', 'Cells 3+: 26 to 50 in the beam.', 'cells') : undefined),
  rule('chamber.cells-lasting', 'proposed', 'proposed', 'Cells 2+ or more late, or 1+ or more later still or after drops have stopped', (findings, context, at) => {
    const rank = cellRank(findings)
    const stopped = (context.daysSinceDropsStopped ?? 0) > 0
    const isLate = rank >= twoPlus && context.daysAfterSurgery >= limit(at, 'twoPlusFromDay')
    const isLater = rank >= onePlus && (context.daysAfterSurgery >= limit(at, 'onePlusFromDay') || stopped)
    return isLate || isLater ? { ...hit('this-week', `Cells ${findings.cells} on day ${context.daysAfterSurgery}${stopped ? ', after drops have stopped' : ''}.`, 'cells'), beside: { daysAfterSurgery: context.daysAfterSurgery } } : undefined
  }, { twoPlusFromDay: lowerable(7, 3, 'days'), onePlusFromDay: lowerable(28, 14, 'days') }),
  rule('chamber.flat', 'common practice', 'common practice', 'Flat anterior chamber', findings => findings.chamberDepth === 'flat' ? hit('now', 'Anterior chamber flat.', 'chamberDepth') : undefined),
  rule('chamber.shallow', 'common practice', 'common practice', 'Shallow anterior chamber', findings => findings.chamberDepth === 'shallow' ? hit('today', 'Anterior chamber shallow.', 'chamberDepth') : undefined),
  rule('chamber.hyphaema', 'proposed', 'proposed', 'Layered blood of any grade, or cells of blood with raised pressure; total blood', (findings, _context, at) => {
    if (findings.hyphaema === 'IV') return hit('now', 'Hyphaema, total.', 'hyphaema')
    if (findings.hyphaema === 'I' || findings.hyphaema === 'II' || findings.hyphaema === 'III') return hit('today', `Hyphaema, grade ${findings.hyphaema}.`, 'hyphaema')
    return findings.hyphaema === 'micro' && (findings.iopMmHg ?? 0) >= limit(at, 'pressureMmHg') ? hit('today', `Blood cells in the chamber with pressure ${findings.iopMmHg} mmHg.`, 'hyphaema', 'iopMmHg') : undefined
  }, { pressureMmHg: lowerable(25, 22, 'mmHg') }),
  rule('chamber.vitreous', 'common practice', 'common practice', 'Vitreous in the chamber or wound', findings => findings.vitreousInChamber ? hit('today', 'Vitreous in the chamber or wound.', 'vitreousInChamber') : undefined),
  rule('cornea.oedema-3', 'proposed', 'proposed', 'Corneal oedema 3 or more', findings => (findings.oedemaGrade ?? 0) >= 3 ? hit('today', `Corneal oedema ${findings.oedemaGrade}.`, 'oedemaGrade') : undefined),
  rule('cornea.oedema-lasting', 'citation', '105-eye series of oedema grade and time to clear: means plus 2 SD', 'Corneal oedema for longer than its grade explains', (findings, context, at) => {
    const grade = findings.oedemaGrade ?? 0
    const isLong = (grade >= 2 && context.daysAfterSurgery > limit(at, 'gradeTwoAfterDay')) || (grade >= 1 && context.daysAfterSurgery > limit(at, 'gradeOneAfterDay'))
    return isLong ? { ...hit('this-week', `Corneal oedema ${grade} on day ${context.daysAfterSurgery}: longer than expected.`, 'oedemaGrade'), beside: { daysAfterSurgery: context.daysAfterSurgery } } : undefined
  }, { gradeTwoAfterDay: lowerable(9, 4, 'days'), gradeOneAfterDay: lowerable(28, 7, 'days') }),
  rule('cornea.infiltrate', 'common practice', 'common practice', 'Infiltrate or abscess', findings => findings.infiltrate ? hit('now', 'Corneal infiltrate or abscess.', 'infiltrate') : undefined),
  rule('cornea.defect', 'proposed', 'proposed', 'Epithelial defect larger than the limit', (findings, _context, at) => (findings.epithelialDefectMm ?? 0) > limit(at, 'overMm') ? hit('today', `Epithelial defect ${findings.epithelialDefectMm} mm.`, 'epithelialDefectMm') : undefined, { overMm: lowerable(1, 0, 'mm') }),
  rule('wound.leak', 'proposed', 'proposed on cited signs', 'Leak without pressing; more urgent with a shallow or flat chamber, low pressure, or iris in the wound', (findings, _context, at) => {
    if (!leaking(findings)) return undefined
    const worse = [shallow(findings) && `${findings.chamberDepth} chamber`, findings.iopMmHg !== undefined && findings.iopMmHg <= limit(at, 'pressureMmHg') && `pressure ${findings.iopMmHg} mmHg`, findings.irisInWound && 'iris in the wound'].filter(each => typeof each === 'string')
    const place = findings.woundClockHour ? ` at ${findings.woundClockHour} o’clock` : ''
    return hit(worse.length ? 'now' : 'today', `Wound leaking${place}${worse.length ? ` with ${worse.join(', ')}` : ''}.`, 'wound', 'seidel', 'woundClockHour', 'chamberDepth', 'iopMmHg', 'irisInWound')
  }, { pressureMmHg: raisable(5, 8, 'mmHg') }),
  rule('wound.provoked-leak', 'proposed', 'proposed', 'Leak only on pressing', findings => findings.seidel === 'provoked' && !leaking(findings) ? hit('this-week', 'Wound leaks only on pressing: look again in 24 to 48 hours.', 'seidel') : undefined),
  rule('wound.iris', 'common practice', 'common practice', 'Iris at or in the wound', findings => findings.irisInWound ? hit('now', 'Iris at or in the wound.', 'irisInWound') : undefined),
  rule('wound.gape', 'proposed', 'proposed', 'Wound gaping', findings => findings.wound === 'gaping' ? hit('today', leaking(findings) ? 'Wound gaping.' : 'Wound gaping, not leaking.', 'wound') : undefined),
]
