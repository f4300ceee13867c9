import { Logger, run } from 'graphile-worker'
import type { Runner } from 'graphile-worker'
import { useDatabase, usePool } from '#server/db/client'
import { sweepUnansweredChecks } from '#server/jobs/messaging/sweep-unanswered-checks'
import { sweepMissing } from '#server/jobs/visit/sweep-missing'
import { now } from '#server/utils/clock'
import { log } from '#server/utils/log'

/** What is done now and then. Each finds its own due rows, so a chore that did not run is made up for by the next. */
const chores = {
  'sweep-unanswered-checks': sweepUnansweredChecks,
  'sweep-missing': sweepMissing,
} as const

/** Every minute; the queue sees to it that one of several processes does each. A run that died is simply the next minute's. */
const crontab = Object.keys(chores).map(name => `* * * * * ${name} ?max=1&jobKey=${name}`).join('\n')

const toLog = new Logger(scope => (level, message) => {
  if (level === 'error' || level === 'warning') log.warn({ scope: scope.label, message: message.slice(0, 300) }, 'chores')
})

export async function runChoresNow(): Promise<void> {
  for (const chore of Object.values(chores)) await chore({ db: useDatabase(), now: now() })
}

/**
 * Starts the queue of chores. Its signal handlers stay off: whoever started us ends us, and then it is released. Without its tables
 * (a database that an older version set up) the product runs and says so; messages do not need it.
 */
export async function startChores(): Promise<() => Promise<void>> {
  const taskList = Object.fromEntries(Object.entries(chores).map(([name, chore]) => [name, async () => void await chore({ db: useDatabase(), now: now() })]))
  let runner: Runner | undefined
  try {
    runner = await run({ pgPool: usePool(), taskList, crontab, concurrency: 1, pollInterval: 15_000, noHandleSignals: true, logger: toLog })
    runner.promise.catch(error => log.warn({ name: (error as Error).name }, 'the chores ended'))
  }
  catch (error) {
    log.warn({ name: (error as Error).name, code: (error as { code?: string }).code }, 'the chores did not start')
  }
  return async () => {
    await runner?.stop().catch(() => undefined)
  }
}
