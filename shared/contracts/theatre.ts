import { z } from 'zod'
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
export const addListBody = z.strictObject({ siteId: z.uuid(), surgeonId: z.uuid('Choose the surgeon.'), room: text(60).min(1, 'Which room?'), startsAt: z.iso.datetime(), endsAt: z.iso.datetime() })
export type AddListBody = z.output<typeof addListBody>
export const addCaseBody = z.strictObject({ pathwayId: z.uuid(), plannedMinutes: z.int().min(5, 'At least 5 minutes.').max(300, 'At most 300 minutes.').optional() })
export const cancelCaseBody = z.strictObject({ reason: text(300).min(3, 'Say why, in a few words.') })

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
  dayOne: dayOneAnswers,
}
export const signNoteBody = z.strictObject(note)
export type SignNoteBody = z.output<typeof signNoteBody>
export const amendNoteBody = z.strictObject({ ...note, baseVersion: z.int().positive(), reason: text(500).min(3, 'Say why the note changes.') })
export type AmendNoteBody = z.output<typeof amendNoteBody>
