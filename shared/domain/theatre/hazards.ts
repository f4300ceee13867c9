import type { Hazard, HazardId, MinimumGrade, MissingFactor, RiskFactors } from '#shared/domain/theatre/vocabulary'
import { difficultyTimeFactors, nucleusDifficulty } from '#shared/domain/theatre/nuclear-density'
import { minimumGrades } from '#shared/domain/theatre/vocabulary'

/** Shallower than this, in mm, external depth. Common practice. */
export const shallowChamberBelowMm = 2.5
/** The lower end of the usual adult range, cells per square millimetre. From memory. */
export const lowEndothelialBelowPerMm2 = 2000

interface HazardRow extends Hazard {
  /** `undefined`: not recorded. */
  present: (factors: RiskFactors) => boolean | undefined
  /** What to find out when it is not recorded. */
  unknownLabel: string
}

const practice = (text: string) => ({ text, label: 'common practice' as const })

/** What each hazard asks for. Time is added to that of the nucleus: a ring takes the same minutes in any eye. The added parts are proposed. */
export const hazardTable: readonly HazardRow[] = [
  {
    id: 'dense-nucleus', label: 'Dense nucleus', unknownLabel: 'Density of the nucleus', addedTime: difficultyTimeFactors.dense - 1,
    equipment: ['Trypan blue dye', 'Second instrument for splitting by hand', 'Heavy and light viscoelastic, two of each', 'Anterior vitrectomy set, checked', 'Spare lens for the sulcus'],
    preparation: ['Long slot', 'Say that sight may clear slowly'],
    minimumGrade: 'experienced', dayOneInPerson: true,
    source: { text: 'LOCS III 5.0 or more, or brunescent: longer slot, senior surgeon, dye, oedema check on day one', label: 'proposed' },
    present: factors => factors.cataract === 'brunescent' || nucleusPart(factors),
  },
  {
    id: 'white-cataract', label: 'White cataract', unknownLabel: 'Whether the cortex is white', addedTime: difficultyTimeFactors.dense - 1,
    equipment: ['Trypan blue dye', 'Heavy and light viscoelastic, two of each', 'Anterior vitrectomy set, checked', 'Spare lens for the sulcus'],
    preparation: ['Ultrasound scan of the back of the eye', 'Say that sight behind the cataract is not known'],
    minimumGrade: 'experienced', dayOneInPerson: true,
    source: practice('Dye and a scan when the cortex hides the capsule and the fundus'),
    present: factors => factors.cataract === undefined ? undefined : factors.cataract === 'white',
  },
  {
    id: 'small-pupil', label: 'Small pupil', unknownLabel: 'Pupil after drops', addedTime: 0.25,
    equipment: ['Pupil ring in the room', 'Iris hooks', 'Phenylephrine for the chamber'],
    preparation: ['Dilating drops early, and again'],
    minimumGrade: 'any-supervised', dayOneInPerson: false,
    source: practice('Ring or hooks; about a quarter of a routine case more'),
    present: factors => factors.pupil === undefined ? undefined : factors.pupil === 'small',
  },
  {
    id: 'pseudoexfoliation', label: 'Pseudoexfoliation', unknownLabel: 'Whether there is pseudoexfoliation', addedTime: 0.1,
    equipment: ['Capsule tension ring, opened on request', 'Pupil ring in the room', 'Anterior vitrectomy set, checked'],
    preparation: ['Look for a moving lens with the patient lying', 'Pressure on day one'],
    minimumGrade: 'experienced', dayOneInPerson: true,
    source: practice('Zonules may be weaker than they look; pressure may rise'),
    present: factors => factors.pseudoexfoliation,
  },
  {
    id: 'weak-zonules', label: 'Weak zonules', unknownLabel: 'Whether the lens moves', addedTime: 0.5,
    equipment: ['Capsule tension ring, opened on request', 'Capsule hooks', 'Anterior vitrectomy set, checked', 'Spare lens for the sulcus', 'Lens for the anterior chamber'],
    preparation: ['Agree beforehand what is done when the bag does not hold'],
    minimumGrade: 'consultant', dayOneInPerson: true,
    source: practice('Support for the bag, and a lens for when it fails'),
    present: factors => factors.weakZonules,
  },
  {
    id: 'alpha-blocker', label: 'Takes an alpha-blocker', unknownLabel: 'Whether an alpha-blocker is or was taken', addedTime: 0.1,
    equipment: ['Phenylephrine for the chamber', 'Pupil ring in the room', 'Iris hooks'],
    preparation: ['Ask also for one taken in the past; stopping it does not help'],
    minimumGrade: 'any-supervised', dayOneInPerson: false,
    source: practice('Floppy iris: prepared for, not waited for'),
    present: factors => factors.alphaBlocker === undefined ? undefined : factors.alphaBlocker !== 'none',
  },
  {
    id: 'shallow-chamber', label: 'Shallow chamber', unknownLabel: 'Depth of the chamber', addedTime: 0.15,
    equipment: ['Heavy and light viscoelastic, two of each'],
    preparation: ['Look at the angle', 'Ask the anaesthetist about mannitol'],
    minimumGrade: 'experienced', dayOneInPerson: false,
    source: practice('External depth below 2.5 mm'),
    present: factors => factors.anteriorChamberDepthMm === undefined ? undefined : factors.anteriorChamberDepthMm < shallowChamberBelowMm,
  },
  {
    id: 'low-endothelial-count', label: 'Few endothelial cells', unknownLabel: 'Endothelial cell count', addedTime: 0.1,
    equipment: ['Heavy and light viscoelastic, two of each'],
    preparation: ['Say that the cornea may clear slowly, or not'],
    minimumGrade: 'experienced', dayOneInPerson: true,
    source: { text: 'Fewer than 2000 cells/mm2, the lower end of the usual adult range', label: 'from memory' },
    present: factors => factors.endothelialCellsPerMm2 === undefined ? undefined : factors.endothelialCellsPerMm2 < lowEndothelialBelowPerMm2,
  },
  {
    id: 'cannot-lie-flat', label: 'Cannot lie flat', unknownLabel: 'Whether the patient can lie flat', addedTime: 0.2,
    equipment: ['Table with a raised back', 'Pillows and knee support'],
    preparation: ['Trial of lying beforehand', 'Anaesthetist beside the patient'],
    minimumGrade: 'experienced', dayOneInPerson: false,
    source: practice('Positioning takes time before the first incision'),
    present: factors => factors.canLieFlat === undefined ? undefined : !factors.canLieFlat,
  },
]

function nucleusPart(factors: RiskFactors): boolean | undefined {
  // White cortex is a hazard of its own; its nucleus is graded only when somebody could see it.
  if (factors.cataract === 'white' && !factors.locs) return undefined
  const difficulty = nucleusDifficulty({ locs: factors.locs })
  return difficulty === undefined ? undefined : difficulty === 'dense'
}

/** Hazards that are present, and those that are not recorded, both in the order of the table. */
export function findHazards(factors: RiskFactors): { present: Hazard[], missing: MissingFactor[] } {
  const present: Hazard[] = []
  const missing: MissingFactor[] = []
  for (const row of hazardTable) {
    const found = row.present(factors)
    if (found) present.push(withoutTest(row))
    // Under white cortex nobody can grade the nucleus: that is said once, by the white cataract.
    if (found === undefined && !(row.id === 'dense-nucleus' && factors.cataract === 'white')) {
      missing.push({ factor: row.id, label: row.unknownLabel, countedAs: countedAs(row) })
    }
  }
  return { present, missing }
}

/** Whether a hazard that is not recorded asks for the check in person all the same. */
export function asksInPerson(id: HazardId): boolean {
  return hazardTable.some(row => row.id === id && row.dayOneInPerson)
}

export function stricterGrade(one: MinimumGrade, other: MinimumGrade): MinimumGrade {
  return minimumGrades.indexOf(one) >= minimumGrades.indexOf(other) ? one : other
}

function countedAs(row: HazardRow): string {
  return row.dayOneInPerson ? 'counts as present for the kind of day-one check, not for time or equipment' : 'to be found out before the day'
}

function withoutTest({ present: _present, unknownLabel: _unknownLabel, ...hazard }: HazardRow): Hazard {
  return hazard
}
