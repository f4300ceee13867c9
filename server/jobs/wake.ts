import pg from 'pg'

const connectAgainMs = 1_000

export interface Wake { sleep: (ms: number) => Promise<void>, ring: () => void, stop: () => Promise<void> }

/**
 * Sleep that ends early when rows changed. Listens to the note that every service gives after its commit, so an alert leaves
 * at once; a lost note costs the length of one sleep, since the rows themselves say what is due.
 */
export function startWake(url = process.env.DATABASE_URL): Wake {
  let client: pg.Client | undefined
  let running = true
  let rung = false
  let wakeUp: (() => void) | undefined
  const ring = () => {
    rung = true
    wakeUp?.()
  }
  const connect = async () => {
    if (!running) return
    const opened = new pg.Client({ connectionString: url, application_name: 'dawnward-wake' })
    opened.on('error', () => undefined)
    opened.on('end', () => {
      if (running) setTimeout(() => void connect(), connectAgainMs)
    })
    opened.on('notification', ring)
    try {
      await opened.connect()
      await opened.query('listen dawnward_live')
      client = opened
      // What was noted while nobody listened.
      ring()
    }
    catch {
      await opened.end().catch(() => undefined)
    }
  }
  void connect()
  const sleep = async (ms: number) => {
    if (!rung && running) {
      await new Promise<void>((resolve) => {
        const timer = setTimeout(resolve, ms)
        wakeUp = () => {
          clearTimeout(timer)
          resolve()
        }
      })
    }
    wakeUp = undefined
    rung = false
  }
  return {
    sleep, ring,
    stop: async () => {
      running = false
      ring()
      await client?.end().catch(() => undefined)
    },
  }
}
