import type { Difficulty, LocsNucleus, RiskFactors, Source } from '#shared/domain/theatre/vocabulary'

export const locsRange = { min: 0.1, max: 6.9 } as const
/** A difference smaller than this between two gradings is within what graders differ by. Chylack et al. 1993, Arch Ophthalmol 111:831-836. */
export const locsTolerance = 0.7

/** From this grade of opalescence or colour on a nucleus counts as dense. Proposed. */
const denseFrom = 5
/** From this grade on a nucleus takes noticeably longer. Proposed. */
const firmFrom = 4
/** From this colour on a nucleus is brown through and through. Proposed. */
const brunescentColourFrom = 6

/**
 * Time of a case by its nucleus, as a multiple of a routine one. A dense nucleus takes about three times a routine
 * case: common practice. The step between is proposed: ultrasound time rises exponentially with colour and
 * opalescence (Davison and Chylack 2003, J Cataract Refract Surg, 2364 cases), so halfway in grade is less than half the way in time.
 */
export const difficultyTimeFactors: Record<Difficulty, number> = { routine: 1, firm: 1.4, dense: 3 }
export const difficultySource: Source = { text: 'Dense nucleus about three routine cases; cut at LOCS III 5.0', label: 'common practice' }

/**
 * `true`, `false`, or `undefined` when nobody said what kind of cataract it is. The model asks for the kind, not for a
 * grade: a soft grade does not make an unsaid kind a usual one. Where the two disagree, `kindContradictsGrade` says so.
 */
export function isBrunescentOrWhite({ cataract }: RiskFactors): boolean | undefined {
  return cataract === undefined ? undefined : cataract !== 'usual'
}

/** A nucleus brown through and through beside a cataract that is called usual: one of the two is a slip. */
export function kindContradictsGrade({ cataract, locs }: RiskFactors): boolean {
  return cataract === 'usual' && locs !== undefined && locs.colour >= brunescentColourFrom
}

/**
 * Difficulty of the nucleus, by the worse of opalescence and colour. A white cataract hides its nucleus and counts as
 * dense: what cannot be graded is never read as soft. `undefined` when nothing was recorded.
 */
export function nucleusDifficulty(factors: Pick<RiskFactors, 'cataract' | 'locs'>): Difficulty | undefined {
  if (factors.cataract === 'brunescent' || factors.cataract === 'white') return 'dense'
  return factors.locs ? difficultyOfLocs(factors.locs) : undefined
}

export function difficultyOfLocs({ opalescence, colour }: LocsNucleus): Difficulty {
  const worse = Math.max(opalescence, colour)
  if (worse >= denseFrom) return 'dense'
  return worse >= firmFrom ? 'firm' : 'routine'
}

/** Whether two gradings of one nucleus differ by more than graders do; used before a change is called one. */
export function locsHasChanged(before: LocsNucleus, after: LocsNucleus): boolean {
  // Tenths are counted as whole numbers: 3.0 - 2.3 is 0.7000000000000002 in binary.
  const tenths = (one: number, other: number) => Math.abs(Math.round(one * 10) - Math.round(other * 10))
  return Math.max(tenths(before.opalescence, after.opalescence), tenths(before.colour, after.colour)) >= locsTolerance * 10
}
