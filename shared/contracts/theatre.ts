import { z } from 'zod'
import { answerWords, safetySteps } from '#shared/domain/theatre/safety-check'
import { alphaBlockers, cataractKinds, pupilSizes, sexes, surgeonGrades } from '#shared/domain/theatre/vocabulary'

const text = (max: number) => z.string().trim().max(max)
const baseVersion = z.int().min(0)
const amendReason = text(500).default('')

/** What the rules can take from biometry and the patient's record is taken from there; the rest is asked. Absent means not recorded. */
export const riskBody = z.strictObject({
  factors: z.strictObject({
    sex: z.enum(sexes).optional(),
    glaucoma: z.boolean().optional(),
    diabeticRetinopathy: z.boolean().optional(),
    cataract: z.enum(cataractKinds).optional(),
    locs: z.strictObject({ opalescence: z.number(), colour: z.number() }).optional(),
    noFundalView: z.boolean().optional(),
    pseudoexfoliation: z.boolean().optional(),
    weakZonules: z.boolean().optional(),
    pupil: z.enum(pupilSizes).optional(),
    alphaBlocker: z.enum(alphaBlockers).optional(),
    canLieFlat: z.boolean().optional(),
    surgeonGrade: z.enum(surgeonGrades).optional(),
  }),
  baseVersion,
})
export type RiskBody = z.output<typeof riskBody>

export const consentBody = z.strictObject({ discussed: text(4000).min(10, 'Say what was discussed.'), riskFigurePercent: z.number().min(0).max(100).optional(), baseVersion, amendReason })
export type ConsentBody = z.output<typeof consentBody>

export const theatreDayQuery = z.object({ siteId: z.uuid().optional(), date: z.iso.date().optional() })
const anaesthetist = { anaesthetistFrom: z.iso.datetime().nullable().default(null), anaesthetistTo: z.iso.datetime().nullable().default(null) }
export const addListBody = z.strictObject({ siteId: z.uuid(), surgeonId: z.uuid('Choose the surgeon.'), room: text(60).min(1, 'Which room?'), startsAt: z.iso.datetime(), endsAt: z.iso.datetime(), ...anaesthetist })
export type AddListBody = z.output<typeof addListBody>
const rowVersion = z.int().positive()
const reason = text(300).default('')
const givenReason = text(300).min(3, 'Say why, in a few words.')
const plannedMinutes = z.int().min(5, 'At least 5 minutes.').max(300, 'At most 300 minutes.')
export const addCaseBody = z.strictObject({ pathwayId: z.uuid(), plannedMinutes: plannedMinutes.optional(), reason })
export type AddCaseBody = z.output<typeof addCaseBody>
export const cancelCaseBody = z.strictObject({ reason: givenReason })
export const replaceCaseBody = z.strictObject({ pathwayId: z.uuid('Choose an eye.'), reason: givenReason })
export type ReplaceCaseBody = z.output<typeof replaceCaseBody>

/** The waiting cases in their new order, on the list version that the caller saw. */
export const orderListBody = z.strictObject({ rowVersion, order: z.array(z.uuid()).min(1).max(60), reason })
export type OrderListBody = z.output<typeof orderListBody>
export const lockListBody = z.strictObject({ rowVersion })
export type LockListBody = z.output<typeof lockListBody>
export const changeListBody = z.strictObject({ rowVersion, ...anaesthetist, reason })
export type ChangeListBody = z.output<typeof changeListBody>

const wallClock = z.union([z.literal(''), z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'A time such as 09:30.')]).optional().transform(value => value || undefined)
export const changeCaseBody = z.strictObject({
  rowVersion,
  plannedMinutes,
  constraints: z.strictObject({ diabetic: z.boolean().optional(), latexAllergy: z.boolean().optional(), interpreterFrom: wallClock, interpreterTo: wallClock, needsAnaesthetist: z.boolean().optional(), lensAvailable: z.boolean().optional() })
    .refine(each => !each.interpreterFrom || !each.interpreterTo || each.interpreterFrom < each.interpreterTo, { path: ['interpreterTo'], message: 'The interpreter leaves after coming.' }),
  reason,
})
export type ChangeCaseBody = z.output<typeof changeCaseBody>

export const safetyStepParams = z.object({ id: z.uuid('Not an id.'), step: z.enum(safetySteps) })
export const safetyStepBody = z.strictObject({ answers: z.record(z.string().max(40), z.enum(answerWords)) })
export type SafetyStepBody = z.output<typeof safetyStepBody>
/** A label as the scanner typed it, or the box read aloud: model, power and use-before date. A label whose number is not known asks for both. */
export const lensScanBody = z.strictObject({
  label: z.string().max(400, 'A label is shorter than this.').default(''),
  typed: z.strictObject({ model: text(120).min(2, 'Which model stands on the box?'), powerD: z.number('Which power stands on the box?').min(-20, 'Between −20 and +60 D.').max(60, 'Between −20 and +60 D.'), expiresOn: z.iso.date('The use-before date on the box.') }).optional(),
}).refine(body => body.label.trim() !== '' || body.typed !== undefined, { path: ['label'], message: 'Scan the label, or type what stands on the box.' })
export type LensScanBody = z.output<typeof lensScanBody>
export const explainStopBody = z.strictObject({ stopId: z.uuid(), words: text(1000).min(3, 'Say why the case goes on all the same.') })
export type ExplainStopBody = z.output<typeof explainStopBody>

const answered = z.boolean().optional()
/** What only the surgeon knows at the end, for the table that says who is seen in person. Unanswered counts as required. */
export const dayOneAnswers = z.strictObject({
  woundConcern: answered, oedemaAtEnd: answered, viscoelasticLeft: answered, complexOrCombined: answered, pseudoexfoliation: answered, uveitis: answered, glaucomaOrHypertension: answered,
  onlyEye: answered, opticNerveOrVein: answered, canReportSymptoms: answered, canUseDrops: answered, canReachEmergencyCare: answered, bothEyesSameDay: answered, surgeonRequest: answered,
})

const note = {
  operatedAt: z.iso.datetime(),
  anaesthesia: text(80).min(2, 'Which anaesthesia?'),
  incision: text(120).min(2, 'Which incision?'),
  woundClockHour: z.int().min(1).max(12, 'A clock hour, 1 to 12.').optional(),
  capsulorhexisMm: z.number().min(2).max(9, 'Between 2 and 9 mm.').optional(),
  technique: text(300).min(2, 'Which technique?'),
  viscoelastics: text(300).default(''),
  energyPercentSeconds: z.number().min(0).max(1000).optional(),
  ultrasoundSeconds: z.number().min(0).max(1800).optional(),
  nuclearDensity: text(80).optional(),
  complications: z.array(text(120).min(2)).max(20),
  complicationWords: text(2000).default(''),
  lensModel: text(120).min(2, 'Which lens was implanted?'),
  lensPowerD: z.number().min(-20, 'Between −20 and +60 D.').max(60, 'Between −20 and +60 D.'),
  lensDeviationExplained: text(1000).default(''),
  drops: z.array(z.strictObject({ drug: text(120).min(2, 'Which drops?'), perDay: z.int().min(1).max(24), days: z.int().min(1).max(180) })).max(10),
  /** Why drops are prescribed that an allergy of the record touches. */
  allergyAnswer: text(500).default(''),
  dayOne: dayOneAnswers,
}
export const signNoteBody = z.strictObject(note)
export type SignNoteBody = z.output<typeof signNoteBody>
export const amendNoteBody = z.strictObject({ ...note, baseVersion: z.int().positive(), reason: text(500).min(3, 'Say why the note changes.') })
export type AmendNoteBody = z.output<typeof amendNoteBody>
