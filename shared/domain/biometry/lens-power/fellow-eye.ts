import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'

export interface FirstEyeResult {
  /** Refraction predicted for the lens that was implanted, spherical equivalent in dioptres. */
  predictedD: number
  /** Refraction reached, spherical equivalent in dioptres. */
  achievedD: number
  /** The first eye has the lens model that is planned now. Unknown counts as no. */
  sameLensModel?: boolean
  /** Weeks between surgery and the refraction. Unknown counts as too early. */
  weeksAfterSurgery?: number
  /** First eye's length less this eye's, in mm. */
  lengthDifferenceMm?: number
  /** First eye's mean K less this eye's, in dioptres. */
  meanKDifferenceD?: number
}

export interface FellowEyeLesson {
  /** Achieved less predicted; positive is more long-sighted than predicted. */
  predictionErrorD: number
  halfD: number
  /** The second eye's prediction if half of the first eye's error repeats. Absent when `reasonsAgainst` is not empty. */
  adjustedPredictionD?: number
  reasonsAgainst: string[]
  source: string
  sourceLabel: 'from memory'
}

const source = 'Half of the first eye\'s error: Covert DJ et al. Ophthalmology 2010;117:49-54; Aristodemou P et al. Ophthalmology 2011;118:1701-1709 (2129 patients); NICE NG77 (2017)'
/** Beyond this the error is a surprise with a cause to be found, not a tendency to be halved ('common practice'). */
const largestErrorD = 1.5
const earliestWeeks = 4
/** The limits between two eyes that the plausibility rules use: more, and the first eye is no model for the second. */
const likeEyes = { lengthMm: 0.3, meanKD: 0.92 }

function reasonsAgainst(first: FirstEyeResult, errorD: number): string[] {
  const reasons: string[] = []
  if (Math.abs(errorD) > largestErrorD) reasons.push(`The first eye missed by more than ${largestErrorD} D: find the cause before anything is taken from it.`)
  if (first.sameLensModel !== true) reasons.push('The first eye is not known to have the same lens model.')
  if (!(first.weeksAfterSurgery !== undefined && first.weeksAfterSurgery >= earliestWeeks)) reasons.push(`The first eye's refraction is not known to be at least ${earliestWeeks} weeks old.`)
  if (Math.abs(first.lengthDifferenceMm ?? 0) > likeEyes.lengthMm) reasons.push('The two eyes differ by more than 0.3 mm in length.')
  if (Math.abs(first.meanKDifferenceD ?? 0) > likeEyes.meanKD) reasons.push('The two corneas differ by more than 0.92 D.')
  return reasons
}

/**
 * What the first eye taught: its prediction error, half of it, and what that half would change in the second eye's
 * prediction. It changes no plan. With an error of +0.80 D a prediction of -0.25 reads +0.15.
 * @param secondPredictedD prediction for the second eye in dioptres.
 * @throws DomainError `biometry.first-eye-out-of-range` for a refraction that is missing or beyond -20 to +20 D.
 */
export function learnFromFirstEye(first: FirstEyeResult, secondPredictedD: number): FellowEyeLesson {
  const fields: FieldProblem[] = []
  const given: [string, unknown, number][] = [['first.predictedD', first?.predictedD, 20], ['first.achievedD', first?.achievedD, 20], ['secondPredictedD', secondPredictedD, 20]]
  for (const [field, value, most] of given) {
    if (typeof value !== 'number' || !(Math.abs(value) <= most)) fields.push({ field, code: 'out-of-range', message: 'Enter the refraction in dioptres, spherical equivalent.', limit: `-${most} to ${most} D` })
  }
  const optional: [string, unknown][] = [['first.weeksAfterSurgery', first?.weeksAfterSurgery], ['first.lengthDifferenceMm', first?.lengthDifferenceMm], ['first.meanKDifferenceD', first?.meanKDifferenceD]]
  for (const [field, value] of optional) {
    if (value !== undefined && !Number.isFinite(value)) fields.push({ field, code: 'not-a-number', message: 'This is not a number. Leave it out when it is not known.' })
  }
  if (fields.length) throw new DomainError('biometry.first-eye-out-of-range', fields[0]!.message, { fields })
  const predictionErrorD = first.achievedD - first.predictedD
  const against = reasonsAgainst(first, predictionErrorD)
  return {
    predictionErrorD,
    halfD: predictionErrorD / 2,
    ...(against.length ? {} : { adjustedPredictionD: secondPredictedD + predictionErrorD / 2 }),
    reasonsAgainst: against,
    source,
    sourceLabel: 'from memory',
  }
}
