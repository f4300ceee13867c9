import { useDatabase } from '#server/db/client'
import { demoClock } from '#server/db/schema/index'
import { climbRungs } from '#server/services/escalation/climb-rungs'
import { sendDueMessages } from '#server/services/messaging/send-due-messages'
import { now, setClockOffset } from '#server/utils/clock'
import { log } from '#server/utils/log'

const pollMs = Number(process.env.DAWNWARD_POLL_MS ?? 400)

/** The clock the demo moved; every process follows it. Outside the demo the offset stays nought. */
export async function followDemoClock(): Promise<void> {
  if (process.env.DAWNWARD_DEMO !== '1') return
  const [row] = await useDatabase().select().from(demoClock)
  setClockOffset((row?.offsetSeconds ?? 0) * 1000)
}

/**
 * The worker: due rows are the truth, so a short poll finds everything whatever was lost on the way. Runs in the app's
 * process or in one of its own; any number may run. Stopping waits for the round that is under way.
 */
export function runWorker(): () => Promise<void> {
  let running = true
  const leaseMs = Number(process.env.DAWNWARD_LEASE_MS ?? 60_000)
  const loop = (async () => {
    while (running) {
      let busy = false
      try {
        await followDemoClock()
        const ctx = { db: useDatabase(), now: now() }
        await climbRungs(ctx)
        busy = await sendDueMessages(ctx, now, leaseMs) > 0
      }
      catch (error) {
        log.warn({ name: (error as Error).name, code: (error as { code?: string }).code }, 'worker round failed')
        await sleep(1_000)
      }
      if (!busy) await sleep(pollMs)
    }
  })()
  return async () => {
    running = false
    await loop
  }
}

function sleep(ms: number): Promise<void> {
  return new Promise(resolve => setTimeout(resolve, ms))
}
