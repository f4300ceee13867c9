import { fallFrom, hit, limit, lowerable, oedemaExplains, reasonWritten, rule } from '#shared/domain/escalation/rule-kit'
import type { EscalationRule } from '#shared/domain/escalation/rule-kit'
import { bestLogMarOf } from '#shared/domain/review/doubts'

/** Lens, refraction, retina, sight, pain and drops. */
export const sightRules: readonly EscalationRule[] = [
  rule('lens.displaced', 'proposed', 'proposed', 'Lens decentred or tilted; more urgent out of the bag, touching the cornea, or with vitreous', (findings) => {
    const position = findings.lensPosition
    const isMoved = position !== undefined && position !== 'centred'
    if (position === 'out-of-bag') return hit('today', 'Lens out of the bag.', 'lensPosition')
    if (findings.lensTouchesCornea) return hit('today', 'Lens touches the cornea.', 'lensPosition', 'lensTouchesCornea')
    if (isMoved && findings.vitreousInChamber) return hit('today', `Lens ${position}, with vitreous.`, 'lensPosition', 'vitreousInChamber')
    return isMoved ? hit('this-week', `Lens ${position}.`, 'lensPosition') : undefined
  }),
  rule('lens.fragment', 'proposed', 'proposed', 'Lens fragment seen; more urgent with raised pressure, oedema 3 or more, or in the back of the eye', (findings, _context, at) => {
    if (!findings.lensFragment || findings.lensFragment === 'none') return undefined
    const isWorse = findings.lensFragment === 'posterior' || (findings.iopMmHg ?? 0) >= limit(at, 'pressureMmHg') || (findings.oedemaGrade ?? 0) >= 3
    return hit(isWorse ? 'today' : 'this-week', `Lens fragment in the ${findings.lensFragment === 'posterior' ? 'back' : 'front'} of the eye.`, 'lensFragment', 'iopMmHg', 'oedemaGrade')
  }, { pressureMmHg: lowerable(30, 22, 'mmHg') }),
  rule('lens.not-as-planned', 'citation', 'RCOphth 2018', 'The lens implanted differs from the plan without an explanation', (_findings, context) => context.lensAsPlanned === false && context.lensDeviationExplained !== true
    ? { ...hit('today', 'The lens implanted differs from the lens planned, and nobody has explained it.'), alsoTell: 'clinical-lead', beside: { lensAsPlanned: false } } : undefined),
  rule('outcome.refraction-surprise', 'proposed', 'proposed', 'Refraction further from the prediction than the limits', (findings, context, at) => {
    if (findings.refractionSphereD === undefined || context.predictedRefractionD === undefined) return undefined
    const equivalentD = findings.refractionSphereD + (findings.refractionCylinderD ?? 0) / 2
    const differenceD = Math.round((equivalentD - context.predictedRefractionD) * 100) / 100
    const sizeD = Math.abs(differenceD)
    const isSurprise = sizeD > limit(at, 'weekOverD') || sizeD > limit(at, 'todayOverD')
    return isSurprise ? { ...hit(sizeD > limit(at, 'todayOverD') ? 'today' : 'this-week', `Refraction differs from the prediction by ${differenceD > 0 ? '+' : '−'}${sizeD.toFixed(2)} D.`, 'refractionSphereD', 'refractionCylinderD'), beside: { predictedRefractionD: context.predictedRefractionD } } : undefined
  }, { weekOverD: lowerable(1, 0.5, 'D'), todayOverD: lowerable(2, 1, 'D') }),
  rule('retina.reflex', 'common practice', 'common practice', 'Red reflex absent where it was present before', (findings, context) => {
    const before = context.previous?.redReflex ?? context.preoperative.redReflex
    return findings.redReflex === 'absent' && before !== 'absent' ? hit('today', before ? 'Red reflex absent where it was present before.' : 'Red reflex absent; what it was before is not recorded.', 'redReflex') : undefined
  }),
  rule('retina.symptoms', 'citation', 'College of Optometrists', 'New flashes or floaters; more urgent with a curtain or loss of field', (findings) => {
    if (findings.curtainOrFieldLoss) return hit('now', 'Curtain or loss of field.', 'curtainOrFieldLoss', 'flashesOrFloaters')
    return findings.flashesOrFloaters ? hit('today', 'New flashes or floaters.', 'flashesOrFloaters') : undefined
  }),
  rule('vision.lost', 'common practice', 'common practice', 'Perception of light or none, where it was better before', (findings, context, at) => {
    const best = bestLogMarOf(findings)
    const before = context.previous?.bestLogMar ?? context.preoperative.bestLogMar
    return best !== undefined && best >= limit(at, 'lightOnlyLogMar') && (before === undefined || before < best) ? { ...hit('now', before === undefined ? 'Sees light only, or nothing; what it was before is not recorded.' : 'Sees light only, or nothing, where it was better before.', 'acuityUnaided', 'acuityPinhole'), beside: { beforeLogMar: before } } : undefined
  }, { lightOnlyLogMar: lowerable(2.7, 2.3, 'logMAR') }),
  rule('vision.worse', 'proposed', 'proposed', 'Best of unaided and pinhole worse than before surgery, with no reason recorded (oedema 2 or more is a reason on days 0 to 7)', (findings, context, at) => {
    const fall = fallFrom(findings, context.preoperative.bestLogMar)
    const isExplained = reasonWritten(findings) || oedemaExplains(findings, context)
    return fall >= limit(at, 'fallLogMar') && !isExplained ? { ...hit('today', `Sight is worse than before surgery by ${fall.toFixed(2)} logMAR, and no reason is recorded.`, 'acuityUnaided', 'acuityPinhole', 'acuityReason'), beside: { beforeLogMar: context.preoperative.bestLogMar } } : undefined
  }, { fallLogMar: lowerable(0.3, 0.1, 'logMAR') }),
  rule('pain.severe', 'proposed', 'proposed', 'Severe pain', (findings, _context, at) => (findings.painScore ?? 0) >= limit(at, 'from') ? hit('now', `Pain ${findings.painScore} of 10.`, 'painScore') : undefined, { from: lowerable(7, 5, 'of 10') }),
  rule('pain.moderate', 'proposed', 'proposed', 'Moderate pain', (findings, _context, at, fired) => (findings.painScore ?? 0) >= limit(at, 'from') && !fired.has('pain.severe') ? hit('today', `Pain ${findings.painScore} of 10.`, 'painScore') : undefined, { from: lowerable(4, 2, 'of 10') }),
  rule('drops.allergy', 'common practice', 'common practice', 'Lids swollen or itching with drops', findings => findings.dropsAllergy ? hit('today', 'Lids swollen or itching with the drops.', 'dropsAllergy') : undefined),
  rule('drops.not-used', 'common practice', 'common practice', 'Not using the drops, or cannot', findings => findings.dropsUse === 'not-using' || findings.dropsUse === 'cannot-use' ? hit('this-week', findings.dropsUse === 'cannot-use' ? 'Cannot put the drops in.' : 'Is not using the drops.', 'dropsUse') : undefined),
]
