/**
 * The one clock. Everything else receives `now`. In the demo the clock can be moved forward, so that
 * reminders and rungs can be seen to happen; the offset is kept in the database and read by clock-sync.
 */
let offsetMs = 0

export function now(): Date {
  return new Date(Date.now() + offsetMs)
}

export function setClockOffset(ms: number): void {
  offsetMs = process.env.DAWNWARD_DEMO === '1' ? ms : 0
}

export function clockOffsetMs(): number {
  return offsetMs
}
