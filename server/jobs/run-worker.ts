import { useDatabase } from '#server/db/client'
import { demoClock } from '#server/db/schema/index'
import { runChoresNow, startChores } from '#server/jobs/chores'
import { startWake } from '#server/jobs/wake'
import { climbRungs } from '#server/services/escalation/climb-rungs'
import { sendDueMessages } from '#server/services/messaging/send-due-messages'
import { clockOffsetMs, now, setClockOffset } from '#server/utils/clock'
import { log } from '#server/utils/log'

/** A note wakes the worker at once; this is how late it may be for what becomes due by itself, or when a note was lost. */
const pollMs = Number(process.env.DAWNWARD_POLL_MS ?? 2_000)
const afterFaultMs = 1_000

/** The clock the demo moved; every process follows it. Outside the demo the offset stays nought. Answers whether it moved. */
export async function followDemoClock(): Promise<boolean> {
  if (process.env.DAWNWARD_DEMO !== '1') return false
  const before = clockOffsetMs()
  const [row] = await useDatabase().select().from(demoClock)
  setClockOffset((row?.offsetSeconds ?? 0) * 1000)
  return clockOffsetMs() !== before
}

/**
 * The worker: due rows are the truth, so a look at them finds everything whatever was lost on the way. Runs in the app's
 * process or in one of its own; any number may run. Stopping waits for the round that is under way.
 */
export function runWorker(): () => Promise<void> {
  let running = true
  const leaseMs = Number(process.env.DAWNWARD_LEASE_MS ?? 60_000)
  const wake = startWake()
  const chores = startChores()
  const loop = (async () => {
    while (running) {
      let busy = false
      try {
        // The chores keep the real minute; the demo's leap over a day is theirs as well.
        if (await followDemoClock()) await runChoresNow()
        const ctx = { db: useDatabase(), now: now() }
        await climbRungs(ctx)
        busy = await sendDueMessages(ctx, now, leaseMs) > 0
      }
      catch (error) {
        log.warn({ name: (error as Error).name, code: (error as { code?: string }).code }, 'worker round failed')
        await wake.sleep(afterFaultMs)
      }
      if (!busy && running) await wake.sleep(pollMs)
    }
  })()
  return async () => {
    running = false
    await wake.stop()
    await loop
    await (await chores)()
  }
}
