/**
 * Who needs a day-one check in person, as a table with sources. Absent facts are unknown, and an unknown counts as required.
 * Built from: AAO Cataract in the Adult Eye, preferred practice pattern, table 6 (functionally one eye, complication, high risk of an
 * early one such as a pressure spike: within 24 h; low risk: within 48 h); RCOphth position quoted in Grzybowski and Kanclerz 2018;
 * Tan 2000, Eye 14:53-55 (5 of 7 complicated eyes had findings). A site's clinical lead signs the table before use.
 */
export interface DayOneFacts {
  operatedAt: Date
  /** Named complications of the operation note; empty when there were none. */
  complications?: readonly string[]
  woundConcern?: boolean
  /** Corneal oedema over 2 at the end of surgery. */
  oedemaAtEnd?: boolean
  viscoelasticLeft?: boolean
  complexOrCombined?: boolean
  denseNucleus?: boolean
  /** Ultrasound energy or time as a multiple of the surgeon's own routine median. */
  ultrasoundTimesMedian?: number
  glaucomaOrHypertension?: boolean
  preoperativeIopMmHg?: number
  pseudoexfoliation?: boolean
  uveitis?: boolean
  onlyEye?: boolean
  opticNerveOrVein?: boolean
  endothelialCellsPerMm2?: number
  bothEyesSameDay?: boolean
  canReportSymptoms?: boolean
  canUseDrops?: boolean
  canReachEmergencyCare?: boolean
  /** A surgeon asked for it. Nobody asking is an answer. */
  surgeonRequest?: boolean
  /** What the patient needs to come. */
  needsTransport?: boolean
  interpreterLanguage?: string | null
  mustBeBeforeNoon?: boolean
}

export type DayOneLabel = 'citation' | 'common practice' | 'proposed'

export interface DayOneLine {
  id: string
  sentence: string
  /** What is not known, for the list of missing data. */
  unknown: string
  source: string
  label: DayOneLabel
  /** Undefined when the fact is not known. */
  applies: (facts: DayOneFacts) => boolean | undefined
  /** Only where there is a microscope room and theatre next door. */
  atHospital: boolean
  beforeNoon: boolean
}

/** 'proposed': beyond these the line applies. */
export const dayOneLimits = { pressureOverMmHg: 22, ultrasoundTimesMedian: 2, endothelialBelowPerMm2: 1500 } as const
const practicePattern = 'AAO preferred practice pattern, table 6'
const college = 'RCOphth position, in Grzybowski and Kanclerz 2018'

function line(id: string, sentence: string, unknown: string, source: string, label: DayOneLabel, applies: DayOneLine['applies'], more: { atHospital?: boolean, beforeNoon?: boolean } = {}): DayOneLine {
  return { id, sentence, unknown, source, label, applies, atHospital: more.atHospital ?? false, beforeNoon: more.beforeNoon ?? false }
}
const opposite = (value: boolean | undefined) => value === undefined ? undefined : !value
/** Either fact is enough; both must be known to say no. */
function either(left: boolean | undefined, right: boolean | undefined): boolean | undefined {
  if (left === true || right === true) return true
  return left === undefined || right === undefined ? undefined : false
}

export const dayOneLines: readonly DayOneLine[] = [
  line('complication', 'There was a complication.', 'complications', practicePattern, 'citation', facts => facts.complications === undefined ? undefined : facts.complications.length > 0, { atHospital: true }),
  line('wound-concern', 'The wound gives concern, or has a suture.', 'the wound at the end', 'proposed', 'proposed', facts => facts.woundConcern, { atHospital: true }),
  line('oedema-at-end', 'The cornea was cloudy at the end.', 'the cornea at the end', 'proposed', 'proposed', facts => facts.oedemaAtEnd, { atHospital: true }),
  line('viscoelastic-left', 'Viscoelastic may be left in the eye.', 'viscoelastic left in the eye', 'Wills Eye Manual, 8th edition; proposed', 'proposed', facts => facts.viscoelasticLeft),
  line('complex-surgery', 'Complex or combined surgery.', 'the kind of surgery', 'proposed', 'proposed', facts => facts.complexOrCombined, { atHospital: true }),
  line('dense-nucleus', 'Dense nucleus or long ultrasound.', 'the density of the nucleus or the ultrasound', 'common practice', 'common practice', facts => either(facts.denseNucleus, facts.ultrasoundTimesMedian === undefined ? undefined : facts.ultrasoundTimesMedian >= dayOneLimits.ultrasoundTimesMedian), { atHospital: true }),
  line('pressure', 'Glaucoma, or raised pressure before surgery.', 'glaucoma or the pressure before surgery', practicePattern, 'citation', facts => either(facts.glaucomaOrHypertension, facts.preoperativeIopMmHg === undefined ? undefined : facts.preoperativeIopMmHg > dayOneLimits.pressureOverMmHg), { beforeNoon: true }),
  line('pseudoexfoliation', 'Pseudoexfoliation.', 'pseudoexfoliation', 'proposed; its effect on pressure is disputed', 'proposed', facts => facts.pseudoexfoliation),
  line('uveitis', 'Uveitis.', 'uveitis', college, 'citation', facts => facts.uveitis),
  line('only-eye', 'Only seeing eye.', 'the sight of the other eye', practicePattern, 'citation', facts => facts.onlyEye, { beforeNoon: true }),
  line('nerve-or-vein', 'Optic nerve damage or an earlier vein occlusion.', 'the optic nerve and veins', 'proposed', 'proposed', facts => facts.opticNerveOrVein, { beforeNoon: true }),
  line('endothelium', 'Low endothelial cell count.', 'the endothelial cell count', 'proposed', 'proposed', facts => facts.endothelialCellsPerMm2 === undefined ? undefined : facts.endothelialCellsPerMm2 < dayOneLimits.endothelialBelowPerMm2, { atHospital: true }),
  line('both-eyes', 'Both eyes were operated on the same day.', 'whether both eyes were operated', 'common practice', 'common practice', facts => facts.bothEyesSameDay),
  line('cannot-report', 'Cannot report symptoms.', 'whether the patient can report symptoms', 'proposed', 'proposed', facts => opposite(facts.canReportSymptoms)),
  line('cannot-use-drops', 'Cannot use the drops.', 'whether the patient can use drops', 'proposed', 'proposed', facts => opposite(facts.canUseDrops)),
  line('no-emergency-access', 'Cannot reach emergency care.', 'whether the patient can reach emergency care', 'proposed', 'proposed', facts => opposite(facts.canReachEmergencyCare)),
  line('surgeon-request', 'The surgeon asks for it.', '', 'common practice', 'common practice', facts => facts.surgeonRequest ?? false),
]

/** What a site chooses for an eye that needs no check in person. */
export const otherwiseChoices = ['in-person', 'telephone', 'open-access'] as const
export type OtherwiseChoice = typeof otherwiseChoices[number]

export interface BookingConstraints { inPerson: boolean, atHospital: boolean, beforeNoon: boolean, transport: boolean, interpreterLanguage: string | null, fellowEyeSameDay: boolean }

export interface DayOneNeed {
  isRequired: boolean
  check: OtherwiseChoice
  /** The lines that fired, in the order of the table. */
  reasons: { id: string, sentence: string, source: string, label: DayOneLabel }[]
  /** What is not recorded, and so counts as required. */
  unknown: string[]
  /** No check later than this is safe. Null when the site leaves it to open access. */
  latestSafeAt: Date | null
  constraints: BookingConstraints
}

const hourMs = 3_600_000
const requiredWithinHours = 24
const otherwiseWithinHours = 48

/**
 * Decides the first check of one operated eye by a site's policy. Hours are elapsed hours, so that a clock change makes nobody wait longer,
 * and a weekend moves nothing: what falls on a Saturday or Sunday is looked at then, never on the Monday.
 */
export function dayOneNeed(facts: DayOneFacts, otherwise: OtherwiseChoice = 'in-person'): DayOneNeed {
  const answers = dayOneLines.map(each => ({ each, applies: each.applies(facts) }))
  const fired = answers.filter(({ applies }) => applies === true).map(({ each }) => each)
  const unknown = answers.filter(({ applies }) => applies === undefined).map(({ each }) => each.unknown)
  const isRequired = fired.length > 0 || unknown.length > 0
  const check = isRequired ? 'in-person' : otherwise
  const withinHours = isRequired ? requiredWithinHours : otherwiseWithinHours
  return {
    isRequired, check, unknown,
    reasons: fired.map(({ id, sentence, source, label }) => ({ id, sentence, source, label })),
    latestSafeAt: check === 'open-access' ? null : new Date(facts.operatedAt.getTime() + withinHours * hourMs),
    constraints: {
      inPerson: check === 'in-person',
      atHospital: fired.some(each => each.atHospital),
      beforeNoon: facts.mustBeBeforeNoon === true || fired.some(each => each.beforeNoon),
      transport: facts.needsTransport === true,
      interpreterLanguage: facts.interpreterLanguage ?? null,
      fellowEyeSameDay: facts.bothEyesSameDay === true,
    },
  }
}
