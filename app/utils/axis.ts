/** Scales of the drawn lines. Every function answers in per cent of the drawing's width, so that it needs no measuring. */

type Anchor = readonly [value: number, percent: number]

/** Straight between the anchors, flat beyond the first and the last. */
export function piecewise(anchors: readonly Anchor[], value: number): number {
  const first = anchors[0]!
  const last = anchors[anchors.length - 1]!
  if (value <= first[0]) return first[1]
  if (value >= last[0]) return last[1]
  const right = anchors.findIndex(([at]) => at >= value)
  const [x1, y1] = anchors[right]!
  const [x0, y0] = anchors[right - 1]!
  return round2(y0 + (value - x0) / (x1 - x0) * (y1 - y0))
}

function round2(value: number): number {
  return Math.round(value * 100) / 100
}

/**
 * Days from surgery, stretched where the work is: twelve weeks to one week take the left 31 %, the last week 11 %,
 * surgery to day one 8 %, day one to one week 15 %, one to six weeks the rest. Beyond twelve weeks before and six
 * weeks after, the axis is pressed into the margins so that a straggler still lands in order.
 */
const wideDays: readonly Anchor[] = [
  [-365, 0.5], [-84, 2], [-56, 9], [-28, 19], [-7, 31], [0, 42], [1, 50], [7, 65], [14, 75.5], [28, 88.5], [42, 98.5], [365, 100],
]
const narrowDays: readonly Anchor[] = [
  [-365, 0.5], [-84, 2], [-56, 9.5], [-28, 17], [-7, 31], [0, 42], [1, 52], [7, 67], [14, 76], [28, 88], [42, 98], [365, 100],
]
/** Between phone and desk there is no room for the weeks before biometry: four weeks to one week take the left 31 %. */
const middleDays: readonly Anchor[] = [
  [-365, 0.5], [-28, 2], [-7, 27], [0, 42], [1, 50], [7, 65], [14, 75.5], [28, 88.5], [42, 98.5], [365, 100],
]

export type DaysAxisWidth = 'wide' | 'middle' | 'narrow'
const daysAxes: Record<DaysAxisWidth, readonly Anchor[]> = { wide: wideDays, middle: middleDays, narrow: narrowDays }

/** Where a day stands on the horizon. `day` counts from surgery (0), negative before it. */
export function daysToPercent(day: number, width: DaysAxisWidth = 'wide'): number {
  return piecewise(daysAxes[width], day)
}

export interface AxisTick {
  at: number
  percent: number
  label: string
  anchor: 'start' | 'middle' | 'end'
}

const dayLabels: Record<DaysAxisWidth, readonly [day: number, label: string, anchor: AxisTick['anchor']][]> = {
  wide: [[-84, '12 weeks', 'start'], [-28, '4 weeks', 'middle'], [-7, '1 week', 'middle'], [1, 'day 1', 'middle'], [7, '1 week', 'middle'], [14, '2 weeks', 'middle'], [28, '4 weeks', 'middle'], [42, '6 weeks', 'end']],
  middle: [[-28, '4 weeks', 'start'], [-7, '1 week', 'middle'], [1, 'day 1', 'start'], [7, '1 week', 'middle'], [42, '6 weeks', 'end']],
  narrow: [[-84, '12 weeks', 'start'], [-7, '1 w', 'middle'], [1, 'day 1', 'start'], [14, '2 w', 'middle'], [42, '6 weeks', 'end']],
}

/** Surgery itself is drawn as the horizon, so it is not among the ticks. */
export function daysTicks(width: DaysAxisWidth = 'wide'): AxisTick[] {
  return dayLabels[width].map(([at, label, anchor]) => ({ at, label, anchor, percent: daysToPercent(at, width) }))
}

/** Minutes left to answer, stretched near zero. Seven days at the right, since five working days span a weekend. */
const timeLeft: readonly Anchor[] = [[0, 0], [15, 14], [60, 36], [240, 55], [480, 68], [2880, 79.25], [10_080, 100]]

/** Overdue is pinned to the left edge: an escalation that is over stays at the top and at zero. */
export function minutesLeftToPercent(minutes: number): number {
  return piecewise(timeLeft, minutes)
}

/**
 * Ticks of the shared time axis. The end of the working day moves as the day passes; a fixed tick that
 * it would cover is left out, so that no two labels meet.
 */
export function minutesLeftTicks(minutesToEndOfDay: number | null): AxisTick[] {
  const fixed: [number, string, AxisTick['anchor']][] = [[0, 'now', 'start'], [15, '15 min', 'middle'], [60, '1 hour', 'middle'], [240, '4 hours', 'middle'], [2880, '2 days', 'middle'], [10_080, '5 working days', 'end']]
  const ticks = fixed.map(([at, label, anchor]) => ({ at, label, anchor, percent: minutesLeftToPercent(at) }))
  if (minutesToEndOfDay === null || minutesToEndOfDay <= 0) return ticks
  const percent = minutesLeftToPercent(minutesToEndOfDay)
  if (percent < 12) return ticks
  const roomEitherSide = 10
  return [...ticks.filter(tick => Math.abs(tick.percent - percent) >= roomEitherSide), { at: minutesToEndOfDay, label: 'end of day', anchor: 'middle' as const, percent }]
    .sort((left, right) => left.at - right.at)
}

/** A plain stretch of time, such as a morning or a calendar, with the same margin kept free at both ends. */
export function linearToPercent(value: number, from: number, to: number, marginPercent = 0): number {
  if (to <= from) return 50
  const share = Math.min(1, Math.max(0, (value - from) / (to - from)))
  return round2(marginPercent + share * (100 - 2 * marginPercent))
}

/** A name over a line: the middle of it and how wide it is drawn, both in per cent. */
export interface PlacedName { percent: number, width: number }

/** How wide a name is drawn at 12.5 px, of a line that is `lineWidthPx` wide. An estimate: letters of the face average 6.6 px. */
export function nameWidth(name: string, lineWidthPx: number): number {
  return round2((name.length * 6.6 + 3) / lineWidthPx * 100)
}

/**
 * Where the names of one line stand so that none touch: level 0 just above it, level 1 one step up, or `null` when
 * neither has room and the name is left to the list below. With `airy`, a name that would stand close is lifted although
 * it would still fit. Names come in the order of their place.
 */
export function nameLevels(names: readonly PlacedName[], airy = false): (0 | 1 | null)[] {
  const last: [PlacedName | null, PlacedName | null] = [null, null]
  const fits = (name: PlacedName, level: 0 | 1, air: number) => {
    const before = last[level]
    return before === null || name.percent - before.percent >= (name.width + before.width) / 2 * air
  }
  return names.map((name) => {
    const tries: [0 | 1, number][] = airy ? [[0, 1.4], [1, 1.4], [0, 1], [1, 1]] : [[0, 1], [1, 1]]
    const found = tries.find(([level, air]) => fits(name, level, air))
    if (!found) return null
    last[found[0]] = name
    return found[0]
  })
}
