import pg from 'pg'
import { forgetSessions } from '#server/services/people/session-cache'

export interface LiveNote { topic: string, siteId: string | null, ids: string[] }
type Listener = (note: LiveNote) => void

const listeners = new Set<Listener>()
let running = false

export function subscribeLive(listener: Listener): () => void {
  listeners.add(listener)
  return () => listeners.delete(listener)
}

/** One LISTEN connection per process. It reconnects by itself and then says `everything`, since notes may have been lost. */
export function startLive(): () => Promise<void> {
  let client: pg.Client | undefined
  running = true
  const connect = async () => {
    if (!running) return
    const opened = new pg.Client({ connectionString: process.env.DATABASE_URL, application_name: 'dawnward-live' })
    opened.on('error', () => undefined)
    opened.on('end', () => {
      if (running) setTimeout(() => void connect(), 1_000)
    })
    opened.on('notification', message => spread(message.payload ?? ''))
    try {
      await opened.connect()
      await opened.query('listen dawnward_live')
      client = opened
      for (const listener of listeners) listener({ topic: 'everything', siteId: null, ids: [] })
    }
    catch {
      await opened.end().catch(() => undefined)
    }
  }
  void connect()
  return async () => {
    running = false
    await client?.end().catch(() => undefined)
  }
}

function spread(payload: string): void {
  try {
    const note = JSON.parse(payload) as LiveNote
    if (note.topic === 'session') return forgetSessions()
    for (const listener of listeners) listener(note)
  }
  catch {
    return
  }
}
