import type { Eye } from '#shared/domain/pathway/vocabulary'

/** What one case needs of its place on the list. Absent means not asked. */
export interface CaseConstraints {
  diabetic?: boolean
  latexAllergy?: boolean
  /** The interpreter's hours, wall clock at the site (`HH:MM`). */
  interpreterFrom?: string
  interpreterTo?: string
  needsAnaesthetist?: boolean
  /** Whether the planned lens is on the shelf; absent means nobody looked. */
  lensAvailable?: boolean
}

export const breachKinds = ['latex-first', 'diabetic-first', 'interpreter', 'anaesthetist', 'lens'] as const
export type BreachKind = typeof breachKinds[number]

/** A constraint that the present order does not keep. */
export interface ConstraintBreach { caseId: string, kind: BreachKind, sentence: string }

/** One case as the checks need it. Minutes of the day are wall clock at the site, planned. */
export interface ConstrainedCase {
  id: string
  patientName: string
  eye: Eye
  constraints: CaseConstraints
  startMinuteOfDay: number
  endMinuteOfDay: number
}

/** When an anaesthetist is in the room, in minutes of the day at the site; `null` when there is none. */
export interface AnaesthetistHours { fromMinuteOfDay: number, toMinuteOfDay: number }

/**
 * The constraints that an order breaks, in the order of the list. All of it is 'common practice': a case with latex allergy goes
 * first, into a room that rested overnight; then patients with diabetes, who fast the shortest; an interpreter and an
 * anaesthetist have hours; a lens that nobody found on the shelf cannot be implanted.
 */
export function findBreaches(cases: readonly ConstrainedCase[], anaesthetist: AnaesthetistHours | null): ConstraintBreach[] {
  return cases.flatMap((one, index) => {
    const before = cases.slice(0, index)
    const { constraints, patientName } = one
    const found: [BreachKind, string | undefined][] = [
      ['latex-first', constraints.latexAllergy && before.some(each => !each.constraints.latexAllergy) ? `${patientName} is allergic to latex and goes first.` : undefined],
      ['diabetic-first', constraints.diabetic && before.some(each => !each.constraints.diabetic && !each.constraints.latexAllergy) ? `${patientName} has diabetes and goes before the others.` : undefined],
      ['interpreter', interpreterProblem(one)],
      ['anaesthetist', anaesthetistProblem(one, anaesthetist)],
      ['lens', constraints.lensAvailable === false ? `The lens for ${patientName} is not on the shelf.` : undefined],
    ]
    return found.flatMap(([kind, sentence]) => sentence ? [{ caseId: one.id, kind, sentence }] : [])
  })
}

/** Breaches that another order may mend: saving an order that has them asks for a reason. */
export const orderBreachKinds: readonly BreachKind[] = ['latex-first', 'diabetic-first', 'interpreter', 'anaesthetist']

function interpreterProblem({ constraints, patientName, startMinuteOfDay, endMinuteOfDay }: ConstrainedCase): string | undefined {
  const from = minuteOf(constraints.interpreterFrom)
  const to = minuteOf(constraints.interpreterTo)
  if (from !== undefined && startMinuteOfDay < from) return `${patientName} would start at ${clock(startMinuteOfDay)}, before the interpreter comes at ${clock(from)}.`
  if (to !== undefined && endMinuteOfDay > to) return `${patientName} would end at ${clock(endMinuteOfDay)}, after the interpreter leaves at ${clock(to)}.`
  return undefined
}

function anaesthetistProblem({ constraints, patientName, startMinuteOfDay, endMinuteOfDay }: ConstrainedCase, hours: AnaesthetistHours | null): string | undefined {
  if (!constraints.needsAnaesthetist) return undefined
  if (!hours) return `${patientName} needs an anaesthetist, and this list has none.`
  if (startMinuteOfDay < hours.fromMinuteOfDay) return `${patientName} would start at ${clock(startMinuteOfDay)}, before the anaesthetist comes at ${clock(hours.fromMinuteOfDay)}.`
  if (endMinuteOfDay > hours.toMinuteOfDay) return `${patientName} would end at ${clock(endMinuteOfDay)}, after the anaesthetist leaves at ${clock(hours.toMinuteOfDay)}.`
  return undefined
}

/** Minutes after midnight of `HH:MM`; `undefined` for nothing or another form. */
export function minuteOf(wallClock: string | undefined): number | undefined {
  const found = /^([01]\d|2[0-3]):([0-5]\d)$/.exec(wallClock ?? '')
  return found ? Number(found[1]) * 60 + Number(found[2]) : undefined
}

function clock(minuteOfDay: number): string {
  const minute = Math.round(minuteOfDay)
  return `${String(Math.floor(minute / 60) % 24).padStart(2, '0')}:${String(minute % 60).padStart(2, '0')}`
}
