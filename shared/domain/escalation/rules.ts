import type { Urgency } from '#shared/domain/pathway/vocabulary'
import { bestLogMarOf } from '#shared/domain/review/doubts'
import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'
import { cellGrades } from '#shared/domain/review/vocabulary'

/** One number of a rule that a clinical lead may tighten within its safe bounds. */
export interface Threshold { value: number, unit: string, safe: readonly [number, number], tighten: 'lower' | 'higher' }
export type Thresholds = Record<string, number>

export interface RuleHit { urgency: Urgency, sentence: string, fired: (keyof ReviewFindings)[], alsoTell?: 'clinical-lead' }

export interface EscalationRule {
  id: string
  version: number
  source: string
  /** 'proposed' rules are signed by a site's clinical lead before use. */
  label: 'citation' | 'common practice' | 'proposed'
  thresholds: Record<string, Threshold>
  /** Undefined when the rule does not fire. Absent findings never fire a rule and are never read as normal. */
  evaluate: (findings: ReviewFindings, context: ReviewContext, at: Thresholds) => RuleHit | undefined
}

function limit(at: Thresholds, name: string): number {
  const value = at[name]
  if (value === undefined) throw new RangeError(`a rule has no limit called ${name}`)
  return value
}

export const cellRank = (findings: ReviewFindings) => findings.cells === undefined ? -1 : cellGrades.indexOf(findings.cells)
const hypopyon = (findings: ReviewFindings) => (findings.hypopyonMm ?? 0) > 0
const fibrin = (findings: ReviewFindings) => findings.fibrin === true || findings.flare === '4+'
const leaking = (findings: ReviewFindings) => findings.seidel === 'spontaneous' || findings.wound === 'leaking'
const shallow = (findings: ReviewFindings) => findings.chamberDepth === 'shallow' || findings.chamberDepth === 'flat'
const reflexLost = (findings: ReviewFindings) => findings.redReflex === 'dull' || findings.redReflex === 'absent'

/** logMAR steps by which sight fell; the reason an examiner gives, or oedema in the first week, explains a fall against before surgery. */
function fallFrom(findings: ReviewFindings, before: number | undefined): number {
  const best = bestLogMarOf(findings)
  return best === undefined || before === undefined ? 0 : Math.round((best - before) * 1000) / 1000
}

export const oedemaExplains = (findings: ReviewFindings, context: ReviewContext) => (findings.oedemaGrade ?? 0) >= 2 && context.daysAfterSurgery <= 7
const explained = (findings: ReviewFindings, context: ReviewContext) => Boolean(findings.acuityReason?.trim()) || oedemaExplains(findings, context)

/** Signs counted by infection.suspected. Any two are enough; pain and hypopyon are never both needed. */
export function infectionSigns(findings: ReviewFindings, context: ReviewContext, at: Thresholds): { words: string, field: keyof ReviewFindings }[] {
  const fellSinceLast = fallFrom(findings, context.previous?.bestLogMar) >= limit(at, 'acuityFallLogMar')
  const fellSinceBefore = fallFrom(findings, context.preoperative.bestLogMar) >= limit(at, 'acuityFallLogMar') && !findings.acuityReason?.trim()
  const signs: [boolean, string, keyof ReviewFindings][] = [
    [(findings.painScore ?? 0) >= limit(at, 'painFrom') || findings.painGrowing === true, findings.painGrowing ? 'pain growing' : `pain ${findings.painScore} of 10`, 'painScore'],
    [fellSinceLast || fellSinceBefore, 'sight worse', 'acuityUnaided'],
    [cellRank(findings) >= cellGrades.indexOf('3+'), `cells ${findings.cells}`, 'cells'],
    [fibrin(findings), 'fibrin', 'fibrin'],
    [hypopyon(findings), 'hypopyon', 'hypopyonMm'],
    [findings.lidSwelling === true, 'lids swollen', 'lidSwelling'],
    [reflexLost(findings), `red reflex ${findings.redReflex}`, 'redReflex'],
    [findings.vitreousCells === true, 'vitreous cells', 'vitreousCells'],
  ]
  return signs.filter(([isThere]) => isThere).map(([, words, field]) => ({ words, field }))
}

const toxic = (findings: ReviewFindings, context: ReviewContext) =>
  context.daysAfterSurgery <= 2 && (findings.oedemaGrade ?? 0) >= 3 && findings.oedemaLimbusToLimbus === true
  && (cellRank(findings) >= cellGrades.indexOf('3+') || fibrin(findings) || hypopyon(findings))

function rule(id: string, source: string, label: EscalationRule['label'], evaluate: EscalationRule['evaluate'], thresholds: Record<string, Threshold> = {}): EscalationRule {
  return { id, version: 1, source, label, thresholds, evaluate }
}
const hit = (urgency: Urgency, sentence: string, ...fired: (keyof ReviewFindings)[]): RuleHit => ({ urgency, sentence, fired })

/** Starting values. High ultrasound energy, long surgery and a dense nucleus are deliberately absent: they shape the visit, not the alarm. */
export const escalationRules: readonly EscalationRule[] = [
  rule('infection.suspected', 'EVS 1995, Arch Ophthalmol 113:1479-1496; ESCRS; College of Optometrists', 'citation', (findings, context, at) => {
    const signs = infectionSigns(findings, context, at)
    return signs.length >= limit(at, 'signs') ? hit('now', `Infection suspected: ${signs.map(sign => sign.words).join(', ')}.`, ...signs.map(sign => sign.field)) : undefined
  }, {
    signs: { value: 2, unit: 'signs', safe: [1, 2], tighten: 'lower' },
    painFrom: { value: 4, unit: 'of 10', safe: [2, 4], tighten: 'lower' },
    acuityFallLogMar: { value: 0.3, unit: 'logMAR', safe: [0.1, 0.3], tighten: 'lower' },
  }),
  rule('chamber.hypopyon', 'common practice', 'common practice', findings => hypopyon(findings) ? hit('now', `Hypopyon ${findings.hypopyonMm} mm.`, 'hypopyonMm') : undefined),
  rule('chamber.fibrin', 'SUN 2005 (flare 4+ is fibrin); proposed', 'proposed', findings => fibrin(findings) ? hit('now', findings.fibrin ? 'Fibrin in the anterior chamber.' : 'Flare 4+, which is fibrin.', 'fibrin', 'flare') : undefined),
  rule('chamber.cells-4', 'SUN 2005; proposed', 'proposed', findings => findings.cells === '4+' ? hit('now', 'Cells 4+: more than 50 in the beam.', 'cells') : undefined),
  rule('chamber.cells-3', 'SUN 2005; proposed', 'proposed', findings => findings.cells === '3+' ? hit('today', 'Cells 3+: 26 to 50 in the beam.', 'cells') : undefined),
  rule('chamber.cells-lasting', 'proposed', 'proposed', (findings, context, at) => {
    const rank = cellRank(findings)
    const late = rank >= 3 && context.daysAfterSurgery >= limit(at, 'twoPlusFromDay')
    const later = rank >= 2 && (context.daysAfterSurgery >= limit(at, 'onePlusFromDay') || (context.daysSinceDropsStopped ?? 0) > 0)
    return late || later ? hit('this-week', `Cells ${findings.cells} on day ${context.daysAfterSurgery}.`, 'cells') : undefined
  }, { twoPlusFromDay: { value: 7, unit: 'days', safe: [3, 7], tighten: 'lower' }, onePlusFromDay: { value: 28, unit: 'days', safe: [14, 28], tighten: 'lower' } }),
  rule('segment.toxic-pattern', 'Toxic anterior segment syndrome literature', 'citation', (findings, context) => toxic(findings, context)
    ? hit('now', 'Limbus-to-limbus oedema with inflammation in the first two days: treat as infection until excluded, and look at every other eye of that list.', 'oedemaGrade', 'oedemaLimbusToLimbus', 'cells', 'fibrin', 'hypopyonMm')
    : undefined),
  rule('list.cluster', 'RCOphth 2022; proposed', 'proposed', (findings, context) => {
    const suspected = toxic(findings, context) || infectionSigns(findings, context, { painFrom: 4, acuityFallLogMar: 0.3 }).length >= 2
    const others = (context.otherSuspectedOnList ?? 0) + (context.otherSuspectedAtSiteThisWeek ?? 0)
    return suspected && others > 0 ? { ...hit('now', 'A second suspected infection or toxic reaction from one list, or at this site within a week.'), alsoTell: 'clinical-lead' as const } : undefined
  }),
  rule('cornea.oedema-3', 'proposed', 'proposed', findings => (findings.oedemaGrade ?? 0) >= 3 ? hit('today', `Corneal oedema ${findings.oedemaGrade}.`, 'oedemaGrade') : undefined),
  rule('cornea.oedema-lasting', '105-eye series: means plus 2 SD', 'citation', (findings, context, at) => {
    const grade = findings.oedemaGrade ?? 0
    return (grade >= 2 && context.daysAfterSurgery > limit(at, 'gradeTwoAfterDay')) || (grade >= 1 && context.daysAfterSurgery > limit(at, 'gradeOneAfterDay'))
      ? hit('this-week', `Corneal oedema ${grade} on day ${context.daysAfterSurgery}: longer than expected.`, 'oedemaGrade') : undefined
  }, { gradeTwoAfterDay: { value: 9, unit: 'days', safe: [4, 9], tighten: 'lower' }, gradeOneAfterDay: { value: 28, unit: 'days', safe: [7, 28], tighten: 'lower' } }),
  rule('cornea.infiltrate', 'common practice', 'common practice', findings => findings.infiltrate ? hit('now', 'Corneal infiltrate or abscess.', 'infiltrate') : undefined),
  rule('cornea.defect', 'proposed', 'proposed', (findings, _context, at) => (findings.epithelialDefectMm ?? 0) > limit(at, 'overMm') ? hit('today', `Epithelial defect ${findings.epithelialDefectMm} mm.`, 'epithelialDefectMm') : undefined, { overMm: { value: 1, unit: 'mm', safe: [0, 1], tighten: 'lower' } }),
  rule('wound.leak', 'proposed on cited signs', 'proposed', (findings, _context, at) => {
    if (!leaking(findings)) return undefined
    const worse = [shallow(findings) && `${findings.chamberDepth} chamber`, findings.iopMmHg !== undefined && findings.iopMmHg <= limit(at, 'pressureMmHg') && `pressure ${findings.iopMmHg} mmHg`, findings.irisInWound && 'iris in the wound'].filter(each => typeof each === 'string')
    const place = findings.woundClockHour ? ` at ${findings.woundClockHour} o’clock` : ''
    return hit(worse.length ? 'now' : 'today', `Wound leaking${place}${worse.length ? ` with ${worse.join(', ')}` : ''}.`, 'wound', 'seidel', 'chamberDepth', 'iopMmHg', 'irisInWound')
  }, { pressureMmHg: { value: 5, unit: 'mmHg', safe: [5, 8], tighten: 'higher' } }),
  rule('wound.provoked-leak', 'proposed', 'proposed', findings => findings.seidel === 'provoked' && !leaking(findings) ? hit('this-week', 'Wound leaks only on pressing: look again in 24 to 48 hours.', 'seidel') : undefined),
  rule('wound.iris', 'common practice', 'common practice', findings => findings.irisInWound ? hit('now', 'Iris at or in the wound.', 'irisInWound') : undefined),
  rule('wound.gape', 'proposed', 'proposed', findings => findings.wound === 'gaping' ? hit('today', 'Wound gaping, not leaking.', 'wound') : undefined),
  rule('chamber.flat', 'common practice', 'common practice', findings => findings.chamberDepth === 'flat' ? hit('now', 'Anterior chamber flat.', 'chamberDepth') : undefined),
  rule('chamber.shallow', 'common practice', 'common practice', findings => findings.chamberDepth === 'shallow' ? hit('today', 'Anterior chamber shallow.', 'chamberDepth') : undefined),
  rule('chamber.hyphaema', 'proposed', 'proposed', (findings, _context, at) => {
    if (findings.hyphaema === 'IV') return hit('now', 'Hyphaema, total.', 'hyphaema')
    if (findings.hyphaema && ['I', 'II', 'III'].includes(findings.hyphaema)) return hit('today', `Hyphaema, grade ${findings.hyphaema}.`, 'hyphaema')
    return findings.hyphaema === 'micro' && (findings.iopMmHg ?? 0) >= limit(at, 'pressureMmHg') ? hit('today', `Blood cells in the chamber with pressure ${findings.iopMmHg} mmHg.`, 'hyphaema', 'iopMmHg') : undefined
  }, { pressureMmHg: { value: 25, unit: 'mmHg', safe: [22, 25], tighten: 'lower' } }),
  rule('chamber.vitreous', 'common practice', 'common practice', findings => findings.vitreousInChamber ? hit('today', 'Vitreous in the chamber or wound.', 'vitreousInChamber') : undefined),
  rule('lens.displaced', 'proposed', 'proposed', (findings) => {
    const position = findings.lensPosition
    if (position === 'out-of-bag' || (position && position !== 'centred' && (findings.lensTouchesCornea || findings.vitreousInChamber))) return hit('today', 'Lens out of the bag, touching the cornea, or with vitreous.', 'lensPosition', 'lensTouchesCornea', 'vitreousInChamber')
    if (findings.lensTouchesCornea) return hit('today', 'Lens touches the cornea.', 'lensTouchesCornea')
    return position === 'decentred' || position === 'tilted' ? hit('this-week', `Lens ${position}.`, 'lensPosition') : undefined
  }),
  rule('lens.fragment', 'proposed', 'proposed', (findings, _context, at) => {
    if (!findings.lensFragment || findings.lensFragment === 'none') return undefined
    const worse = findings.lensFragment === 'posterior' || (findings.iopMmHg ?? 0) >= limit(at, 'pressureMmHg') || (findings.oedemaGrade ?? 0) >= 3
    return hit(worse ? 'today' : 'this-week', `Lens fragment in the ${findings.lensFragment === 'posterior' ? 'back' : 'front'} of the eye.`, 'lensFragment', 'iopMmHg', 'oedemaGrade')
  }, { pressureMmHg: { value: 30, unit: 'mmHg', safe: [22, 30], tighten: 'lower' } }),
  rule('lens.not-as-planned', 'RCOphth 2018', 'citation', (_findings, context) => context.lensAsPlanned === false && context.lensDeviationExplained !== true
    ? { ...hit('today', 'The lens implanted differs from the lens planned, and nobody has explained it.'), alsoTell: 'clinical-lead' as const } : undefined),
  rule('outcome.refraction-surprise', 'proposed', 'proposed', (findings, context, at) => {
    if (findings.refractionSphereD === undefined || context.predictedRefractionD === undefined) return undefined
    const equivalentD = findings.refractionSphereD + (findings.refractionCylinderD ?? 0) / 2
    const differenceD = Math.round((equivalentD - context.predictedRefractionD) * 100) / 100
    const size = Math.abs(differenceD)
    if (size <= limit(at, 'weekOverD')) return undefined
    return hit(size > limit(at, 'todayOverD') ? 'today' : 'this-week', `Refraction differs from the prediction by ${differenceD > 0 ? '+' : '−'}${size.toFixed(2)} D.`, 'refractionSphereD', 'refractionCylinderD')
  }, { weekOverD: { value: 1, unit: 'D', safe: [0.5, 1], tighten: 'lower' }, todayOverD: { value: 2, unit: 'D', safe: [1, 2], tighten: 'lower' } }),
  rule('retina.reflex', 'common practice', 'common practice', (findings, context) => {
    const before = context.previous?.redReflex ?? context.preoperative.redReflex
    return findings.redReflex === 'absent' && before !== 'absent' ? hit('today', before ? 'Red reflex absent where it was present before.' : 'Red reflex absent; what it was before is not recorded.', 'redReflex') : undefined
  }),
  rule('retina.symptoms', 'College of Optometrists', 'citation', (findings) => {
    if (findings.curtainOrFieldLoss) return hit('now', 'Curtain or loss of field.', 'curtainOrFieldLoss')
    return findings.flashesOrFloaters ? hit('today', 'New flashes or floaters.', 'flashesOrFloaters') : undefined
  }),
  rule('vision.lost', 'common practice', 'common practice', (findings, context, at) => {
    const best = bestLogMarOf(findings)
    const before = context.previous?.bestLogMar ?? context.preoperative.bestLogMar
    return best !== undefined && best >= limit(at, 'lightOnlyLogMar') && (before === undefined || before < limit(at, 'lightOnlyLogMar')) ? hit('now', 'Sees light only, or nothing, where it was better before.', 'acuityUnaided', 'acuityPinhole') : undefined
  }, { lightOnlyLogMar: { value: 2.7, unit: 'logMAR', safe: [2.3, 2.7], tighten: 'lower' } }),
  rule('vision.worse', 'proposed', 'proposed', (findings, context, at) => {
    const fall = fallFrom(findings, context.preoperative.bestLogMar)
    return fall >= limit(at, 'fallLogMar') && !explained(findings, context) ? hit('today', `Sight is worse than before surgery by ${fall.toFixed(1)} logMAR, and no reason is recorded.`, 'acuityUnaided', 'acuityPinhole', 'acuityReason') : undefined
  }, { fallLogMar: { value: 0.3, unit: 'logMAR', safe: [0.1, 0.3], tighten: 'lower' } }),
  rule('pain.severe', 'proposed', 'proposed', (findings, _context, at) => (findings.painScore ?? 0) >= limit(at, 'from') ? hit('now', `Pain ${findings.painScore} of 10.`, 'painScore') : undefined, { from: { value: 7, unit: 'of 10', safe: [5, 7], tighten: 'lower' } }),
  rule('pain.moderate', 'proposed', 'proposed', (findings, _context, at) => (findings.painScore ?? 0) >= limit(at, 'from') && (findings.painScore ?? 0) < 7 ? hit('today', `Pain ${findings.painScore} of 10.`, 'painScore') : undefined, { from: { value: 4, unit: 'of 10', safe: [2, 4], tighten: 'lower' } }),
  rule('drops.allergy', 'common practice', 'common practice', findings => findings.dropsAllergy ? hit('today', 'Lids swollen or itching with the drops.', 'dropsAllergy') : undefined),
  rule('drops.not-used', 'common practice', 'common practice', findings => findings.dropsUse === 'not-using' || findings.dropsUse === 'cannot-use' ? hit('this-week', findings.dropsUse === 'cannot-use' ? 'Cannot put the drops in.' : 'Is not using the drops.', 'dropsUse') : undefined),
]
