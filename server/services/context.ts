import type { Database } from '#server/db/client'
import type { Actor } from '#shared/domain/people/vocabulary'

/** What every service receives first: the database, the time, and who is asking. */
export interface ServiceContext {
  db: Database
  now: Date
  actor: Actor
}

/** A service that no person asked for: a job, a webhook, the patient's own link. */
export interface SystemContext {
  db: Database
  now: Date
}
